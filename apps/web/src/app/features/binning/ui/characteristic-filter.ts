import type { CharacteristicSummary } from '@tallystone/contracts/binnings/schema';
import { DASH, fixed } from '../../../ui/numbers';

/** What part of the list is shown; stands in the address. */
export const shownParts = [
  'all',
  'included',
  'left-out',
  'warnings',
  'unstable',
  'same',
  'edited',
  'not-carried',
  'unexplained',
] as const;
export type ShownPart = (typeof shownParts)[number];

export const partWords: Record<ShownPart, string> = {
  all: 'All',
  included: 'Included',
  'left-out': 'Left out',
  warnings: 'With a warning',
  unstable: 'Unstable',
  same: 'Saying the same as another',
  edited: 'Edited by hand',
  'not-carried': 'Edits not carried over',
  unexplained: 'Edits not explained',
};

const holds: Record<ShownPart, (one: CharacteristicSummary) => boolean> = {
  all: () => true,
  included: (one) => one.included,
  'left-out': (one) => !one.included,
  warnings: (one) => one.warnings.length > 0,
  unstable: (one) => one.warnings.some(({ code }) => code.startsWith('unstable')),
  same: (one) => one.group !== null,
  edited: (one) => one.edits > 0,
  'not-carried': (one) => one.notCarried > 0,
  unexplained: (one) => one.editsWithoutReason > 0,
};

export const asPart = (text: string | undefined): ShownPart => shownParts.find((part) => part === text) ?? 'all';

/** @param labels what the dictionary calls the columns, which is shown beside their names and searched as well */
export function filtered(
  list: readonly CharacteristicSummary[],
  part: ShownPart,
  search: string,
  labels: ReadonlyMap<string, string> = new Map(),
): CharacteristicSummary[] {
  const wanted = search.trim().toLowerCase();
  return list.filter(
    (one) => holds[part](one) && [one.column, labels.get(one.column) ?? ''].some((name) => name.toLowerCase().includes(wanted)),
  );
}

const warningWords: Record<CharacteristicSummary['warnings'][number]['code'], string> = {
  'small-bin': 'small bin',
  'zero-cell': 'zero cell',
  'not-monotone': 'not monotone',
  'reversed-in-hold-out': 'reversed in hold-out',
  'reversed-out-of-time': 'reversed out of time',
  'unstable-in-hold-out': 'unstable in hold-out',
  'unstable-out-of-time': 'unstable out of time',
  'unstable-by-month': 'unstable by month',
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

/** Two ends of an interval in one cell. @example intervalText(0.21, 0.4) // '0.210–0.400' */
export const intervalText = (lower: number | null, upper: number | null): string =>
  lower === null || upper === null ? DASH : `${fixed(lower, 3)}–${fixed(upper, 3)}`;
