import { thin } from '../../profiling/kind';

/** What rows that need a weight hold in the column of the weights that is none. Counts are rows. */
export interface WeightFaults {
  readonly missing: number;
  readonly negative: number;
  /** Null without a negative one. */
  readonly smallest: number | null;
  readonly unreadable: number;
  /** Texts that are no numbers, the most frequent first, at most three. */
  readonly examples: readonly string[];
}

/** What is wrong, a sentence for each fault with its count and what can be done about it. */
export function weightSentences(column: string, faults: WeightFaults): { code: string; message: string }[] {
  const said: { code: string; message: string }[] = [];
  const rows = (count: number): string => `${thin(count)} ${count === 1 ? 'row that needs one' : 'rows that need one'}`;
  if (faults.negative > 0)
    said.push({
      code: 'negative-weight',
      message: `${column} has weights below zero in ${rows(faults.negative)}, the smallest ${faults.smallest}. Weights are zero or more: mend them in the file, exclude these rows with a reason (${column} is below 0), or give the role to another column.`,
    });
  if (faults.unreadable > 0)
    said.push({
      code: 'unreadable-weight',
      message: `${column} has weights that are no numbers in ${rows(faults.unreadable)}: ${faults.examples.map((text) => JSON.stringify(text)).join(', ')}. Mend them in the file, read it with other choices, or exclude these rows with a reason (${column} is one of these).`,
    });
  if (faults.missing > 0)
    said.push({
      code: 'missing-weight',
      message: `The weight ${column} is missing in ${rows(faults.missing)}; zero is allowed. Mend them in the file, exclude these rows with a reason (${column} is missing), or give the role to another column.`,
    });
  return said;
}
