import { waitsForAnswer } from '@tallystone/contracts/samples/flags';
import type { ColumnQuality, QualityFlag } from '@tallystone/contracts/samples/quality';

/** Whether a flag still asks somebody, by the roles of the report's columns. */
export const waits = (flag: QualityFlag, roles: ReadonlyMap<string, ColumnQuality['role']>): boolean =>
  waitsForAnswer(flag, flag.column === null ? null : roles.get(flag.column));

const words: Partial<Record<QualityFlag['code'], string>> = {
  'duplicate-rows': 'Duplicate rows',
  'months-without-rows': 'Months without rows',
  'leakage-value': 'Leakage? It predicts very well',
  'missing-one-outcome': 'Leakage? Missing for one outcome only',
  'one-value-per-outcome': 'Leakage? One value per outcome',
  'missing-drift': 'Missing share changes',
  drift: 'Drift',
  outliers: 'Outliers',
  constant: 'Constant',
  'near-constant': 'Nearly constant',
  'all-missing': 'All missing',
  'mostly-missing': 'Mostly missing',
  'near-unique': 'Nearly all different',
  'special-code-suspected': 'Special codes?',
  'looks-like-identifier': 'Identifies applicants',
  'looks-like-email': 'E-mail addresses',
  'looks-like-name': 'Names of people',
  'looks-like-protected': 'Protected?',
  'holds-personal-data': 'Personal data in values',
  'repeated-identifiers': 'Repeated identifiers',
  'near-duplicate-identifiers': 'Near-duplicate identifiers',
  'like-categories': 'Categories written alike',
  'unreadable-numbers': 'Values that are no numbers',
  'numbers-as-text': 'Numbers as text',
  'mixed-numbers': 'Numbers written in more than one way',
  'ambiguous-numbers': 'Decimals or thousands?',
  'doubtful-dates': 'Doubtful dates',
};

export const flagTitle = ({ code }: Pick<QualityFlag, 'code'>): string => words[code] ?? code.replaceAll('-', ' ');

/** Open ones first, then by weight, in the order of the file. */
export function inOrder(flags: readonly QualityFlag[], roles: ReadonlyMap<string, ColumnQuality['role']>): QualityFlag[] {
  const weights = { stop: 0, look: 1, note: 2 } as const;
  const rank = (flag: QualityFlag): number => (waits(flag, roles) ? 0 : 10) + weights[flag.weight];
  return flags
    .map((flag, place) => ({ flag, place }))
    .sort((a, b) => rank(a.flag) - rank(b.flag) || a.place - b.place)
    .map(({ flag }) => flag);
}
