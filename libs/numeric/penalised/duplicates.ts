import type { FitProblem, Penalty } from './problem';

/**
 * Columns that say the same as an earlier one. Where the penalty does not tell such columns apart (the lasso, or no penalty at all) the optimum is
 * not unique: any split between them is as good. One of them is then chosen by rule, so that every solver, on every machine, returns the same
 * coefficients: the first in order carries all, the later ones are held at 0. Ridge and the elastic net share between them and need no rule.
 */

/** Rows looked at first: columns that differ almost always differ there. */
const PROBES = 256;
/** Of the column's range: what rounding may do to a column that was scaled or shifted. */
const CLOSE = 1e-12;

/**
 * The problem with later duplicates held at 0 by their limits; the same object where there are none.
 *
 * Column k duplicates column j < k when x_k = a + b x_j on every row that has weight, b of either sign (without standardising |b| = 1), their
 * multipliers are equal, and their limits are alike (for b < 0 mirrored) and either 0 or none.
 * @example withDuplicatesHeld({ columns: [a, b, a], outcome, penalty: { mixing: 1, standardize: true } }).penalty.upper // [Infinity, Infinity, 0]
 */
export function withDuplicatesHeld(problem: FitProblem): FitProblem {
  const { columns, penalty, weights } = problem;
  const candidates = columns.flatMap((_, j) => (penalty.mixing === 1 || multiplierOf(penalty, j) === 0 ? [j] : []));
  if (candidates.length < 2) return problem;
  const shapes = new Map<string, number[]>();
  const held: number[] = [];
  for (const k of candidates) {
    const shape = shapeOf(columns[k], weights);
    if (shape === null) continue;
    const alike = shapes.get(shape) ?? [];
    const first = alike.find((j) => isDuplicate(problem, j, k));
    if (first === undefined) shapes.set(shape, [...alike, k]);
    else held.push(k);
  }
  if (held.length === 0) return problem;
  const lower = penalty.lower?.slice() ?? new Float64Array(columns.length).fill(-Infinity);
  const upper = penalty.upper?.slice() ?? new Float64Array(columns.length).fill(Infinity);
  for (const k of held) lower[k] = upper[k] = 0;
  return { ...problem, penalty: { ...penalty, lower, upper } };
}

const multiplierOf = (penalty: Penalty, j: number): number => penalty.multipliers?.[j] ?? 1;

/** Two rows with weight on which a column differs; null for a column that is constant. */
function differingRows(column: Float64Array, weights: Float64Array | undefined): [number, number] | null {
  const counts = (i: number): boolean => weights === undefined || weights[i] > 0;
  let first = 0;
  while (first < column.length && !counts(first)) first++;
  for (let i = first + 1; i < column.length; i++) if (column[i] !== column[first] && counts(i)) return [first, i];
  return null;
}

/** The same text for columns that are shifted and scaled copies of each other: probes in units of the first difference. */
function shapeOf(column: Float64Array, weights: Float64Array | undefined): string | null {
  const ends = differingRows(column, weights);
  if (ends === null) return null;
  const [p, q] = ends;
  const unit = column[q] - column[p];
  const step = Math.max(1, Math.floor(column.length / PROBES));
  let shape = `${p} ${q}`;
  for (let i = 0; i < column.length; i += step) {
    if (weights !== undefined && !(weights[i] > 0)) continue;
    // Six digits: rounding of a copy must not part it from its original; what is alike so far is compared in full.
    shape += ` ${((column[i] - column[p]) / unit).toPrecision(6)}`;
  }
  return shape;
}

function isDuplicate({ columns, penalty, weights }: FitProblem, j: number, k: number): boolean {
  const a = columns[j];
  const b = columns[k];
  const ends = differingRows(a, weights);
  if (ends === null || multiplierOf(penalty, j) !== multiplierOf(penalty, k)) return false;
  const [p, q] = ends;
  const slope = (b[q] - b[p]) / (a[q] - a[p]);
  if (!Number.isFinite(slope) || slope === 0) return false;
  if (!penalty.standardize && Math.abs(Math.abs(slope) - 1) > CLOSE) return false;
  if (!limitsAlike(penalty, j, k, slope > 0)) return false;
  let largest = 0;
  let smallest = 0;
  let farthest = 0;
  for (let i = 0; i < a.length; i++) {
    if (weights !== undefined && !(weights[i] > 0)) continue;
    const wanted = slope * (a[i] - a[p]);
    largest = Math.max(largest, wanted);
    smallest = Math.min(smallest, wanted);
    farthest = Math.max(farthest, Math.abs(b[i] - b[p] - wanted));
  }
  return farthest <= CLOSE * (largest - smallest);
}

function limitsAlike({ lower, upper }: Penalty, j: number, k: number, sameSign: boolean): boolean {
  const low = (column: number): number => lower?.[column] ?? -Infinity;
  const high = (column: number): number => upper?.[column] ?? Infinity;
  const plain = (limit: number): boolean => limit === 0 || !Number.isFinite(limit);
  if (![low(j), high(j), low(k), high(k)].every(plain)) return false;
  return sameSign ? low(j) === low(k) && high(j) === high(k) : low(j) === -high(k) && high(j) === -low(k);
}
