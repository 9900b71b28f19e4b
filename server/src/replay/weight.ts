import type { Columns } from './columns';
import { ValueCounts, type ReplayProblem } from './problems';
import { BAD, DECLINED, GOOD, INDETERMINATE } from './types';

/** Whether a row of this outcome enters a fit or a metric. */
export const needsWeight = (outcome: number): boolean => outcome === GOOD || outcome === BAD || outcome === DECLINED;

/**
 * Weights of the rows that enter a fit or a metric (goods, bads, declined), and of indeterminates, which enter where a fit is made again with them as
 * good or as bad; other rows get 0. Zero is allowed; missing, negative and unreadable weights are problems, and so are weights that are all zero. An
 * indeterminate whose weight cannot be read gets 0: no figure of a version rests on it.
 */
export function readWeights(name: string, columns: Columns, outcome: Uint8Array, problems: ReplayProblem[]): Float64Array | null {
  const view = columns.numbers(name);
  if (view === null) return null;
  const weights = new Float64Array(columns.rows);
  const faults = new ValueCounts();
  let total = 0;
  for (let row = 0; row < weights.length; row++) {
    const needed = needsWeight(outcome[row]);
    if (!needed && outcome[row] !== INDETERMINATE) continue;
    const weight = view.number(row);
    if (!needed) {
      if (weight >= 0) weights[row] = weight;
      continue;
    }
    if (weight >= 0) {
      weights[row] = weight;
      total += weight;
    } else {
      faults.add(view.text(row));
    }
  }
  const problem = faults.problem(
    'bad-weight',
    name,
    (listed, rows) =>
      `${rows} row${rows === 1 ? ' has a weight that is' : 's have weights that are'} not a number of at least 0: ${listed}.`,
  );
  if (problem !== null) problems.push(problem);
  else if (total === 0)
    problems.push({ code: 'zero-weights', message: `The weights in "${name}" are all zero.`, where: { column: name } });
  return weights;
}
