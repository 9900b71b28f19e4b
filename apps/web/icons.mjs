/**
 * Writes src/app/ui/icons.ts from the path strings of @mdi/js (Apache 2.0), so that only the icons in use reach the client and no
 * icon font is needed. Add a name here, run `node apps/web/icons.mjs`, and use it as <mat-icon svgIcon="name">.
 */
import * as mdi from '@mdi/js';
import { writeFileSync } from 'node:fs';

const icons = {
  account: 'mdiAccountOutline',
  add: 'mdiPlus',
  alert: 'mdiAlertOutline',
  'arrow-down': 'mdiArrowDown',
  'arrow-left': 'mdiArrowLeft',
  'arrow-right': 'mdiArrowRight',
  'arrow-up': 'mdiArrowUp',
  chart: 'mdiChartBellCurve',
  check: 'mdiCheck',
  'chevron-down': 'mdiChevronDown',
  'chevron-left': 'mdiChevronLeft',
  'chevron-right': 'mdiChevronRight',
  close: 'mdiClose',
  compare: 'mdiCompare',
  copy: 'mdiContentCopy',
  delete: 'mdiDeleteOutline',
  document: 'mdiFileDocumentOutline',
  download: 'mdiDownload',
  edit: 'mdiPencilOutline',
  filter: 'mdiFilterVariant',
  help: 'mdiHelpCircleOutline',
  history: 'mdiHistory',
  info: 'mdiInformationOutline',
  keyboard: 'mdiKeyboardOutline',
  lock: 'mdiLockOutline',
  menu: 'mdiMenu',
  merge: 'mdiCallMerge',
  more: 'mdiDotsVertical',
  open: 'mdiOpenInNew',
  redo: 'mdiRedo',
  refresh: 'mdiRefresh',
  search: 'mdiMagnify',
  'sign-out': 'mdiLogout',
  split: 'mdiCallSplit',
  start: 'mdiPlay',
  stop: 'mdiStop',
  table: 'mdiTable',
  'theme-dark': 'mdiWeatherNight',
  'theme-light': 'mdiWhiteBalanceSunny',
  'theme-system': 'mdiThemeLightDark',
  undo: 'mdiUndo',
  upload: 'mdiTrayArrowUp',
};

const lines = Object.entries(icons).map(([name, key]) => {
  const path = mdi[key];
  if (typeof path !== 'string') throw new Error(`@mdi/js has no ${key}`);
  const quoted = name.includes('-') ? `'${name}'` : name;
  return `  ${quoted}:\n    '${path}',`;
});

const source = `// Written by apps/web/icons.mjs from @mdi/js (Apache License 2.0, Pictogrammers). Do not edit by hand.
/* prettier-ignore */
export const iconPaths = {
${lines.join('\n')}
} as const;

export type IconName = keyof typeof iconPaths;
`;

writeFileSync(new URL('./src/app/ui/icons.ts', import.meta.url), source);
