import type { CharacteristicSummary } from '@tallystone/contracts/binnings/schema';

/** What part of the list is shown; stands in the address. */
export const shownParts = ['all', 'included', 'left-out', 'warnings', 'edited', 'unexplained'] as const;
export type ShownPart = (typeof shownParts)[number];

export const partWords: Record<ShownPart, string> = {
  all: 'All',
  included: 'Included',
  'left-out': 'Left out',
  warnings: 'With a warning',
  edited: 'Edited by hand',
  unexplained: 'Edits not explained',
};

const holds: Record<ShownPart, (one: CharacteristicSummary) => boolean> = {
  all: () => true,
  included: (one) => one.included,
  'left-out': (one) => !one.included,
  warnings: (one) => one.warnings.length > 0,
  edited: (one) => one.edits > 0,
  unexplained: (one) => one.editsWithoutReason > 0,
};

export const asPart = (text: string | undefined): ShownPart => shownParts.find((part) => part === text) ?? 'all';

export function filtered(list: readonly CharacteristicSummary[], part: ShownPart, search: string): CharacteristicSummary[] {
  const wanted = search.trim().toLowerCase();
  return list.filter((one) => holds[part](one) && one.column.toLowerCase().includes(wanted));
}

const warningWords: Record<CharacteristicSummary['warnings'][number]['code'], string> = {
  'small-bin': 'small bin',
  'zero-cell': 'zero cell',
  'not-monotone': 'not monotone',
  'reversed-in-hold-out': 'reversed in hold-out',
  'reversed-out-of-time': 'reversed in out-of-time',
  'high-information-value': 'check for leakage',
  'one-bin': 'one bin',
};

/** Warnings of a characteristic in as few words as a table has room for. */
export const warningsOf = (one: CharacteristicSummary): string => one.warnings.map(({ code }) => warningWords[code]).join(', ');

/** The trend of risk, which runs against that of WOE. */
export const riskTrend: Record<CharacteristicSummary['trend'], string> = {
  rising: 'falls',
  falling: 'rises',
  'one-peak': 'falls, then rises',
  'one-valley': 'rises, then falls',
  mixed: 'up and down',
  none: '',
};
