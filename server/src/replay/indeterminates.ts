import { Columns } from './columns';
import { assignPartition } from './partition';
import { refuse, type ReplayProblem } from './problems';
import type { SampleDefinition } from './prepare';
import type { Specification } from '@tallystone/contracts/specification/types';
import type { ColumnSource } from './source';
import { BAD, DEVELOPMENT, GOOD, HOLD_OUT, INDETERMINATE, type Prepared } from './types';

export interface KnownCounts {
  goods: number;
  bads: number;
}

export interface IndeterminateCase {
  indeterminates: 'as they are' | 'as good' | 'as bad';
  development: KnownCounts;
  holdOut: KnownCounts;
}

/** How an indeterminate row can be read, and its outcome then. */
export const readings = [
  ['as they are', INDETERMINATE],
  ['as good', GOOD],
  ['as bad', BAD],
] as const;

/**
 * What development and hold-out hold when every indeterminate row counts as it is, as good, as bad. The partition is drawn anew each time,
 * because hold-out is drawn from goods and bads alone. Rows are counted, not weights; out-of-time is left out.
 *
 * @returns three cases, or none where nothing is indeterminate
 * @example indeterminateCases(definition, prepared, source)[2].development.bads
 * Source: re-running with indeterminates as good, then as bad, is common practice.
 */
export function indeterminateCases(definition: SampleDefinition, prepared: Prepared, source: ColumnSource): IndeterminateCase[] {
  if (!prepared.outcome.includes(INDETERMINATE)) return [];
  const spec = definition as Specification;
  return readings.map(([indeterminates, code]) => {
    const outcome = code === INDETERMINATE ? prepared.outcome : prepared.outcome.map((value) => (value === INDETERMINATE ? code : value));
    const problems: ReplayProblem[] = [];
    const partition = code === INDETERMINATE ? prepared.partition : assignPartition(spec, new Columns(source, spec.data), outcome, problems);
    refuse(problems);
    return { indeterminates, development: countKnown(outcome, partition, DEVELOPMENT), holdOut: countKnown(outcome, partition, HOLD_OUT) };
  });
}

function countKnown(outcome: Uint8Array, partition: Uint8Array, wanted: number): KnownCounts {
  const counts = { goods: 0, bads: 0 };
  for (let row = 0; row < outcome.length; row++) {
    if (partition[row] !== wanted) continue;
    if (outcome[row] === GOOD) counts.goods++;
    else if (outcome[row] === BAD) counts.bads++;
  }
  return counts;
}
