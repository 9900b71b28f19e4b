import { requireFinite, requireOutcome, requireThat } from '../checks';
import { Generator } from '../random/generator';

/**
 * How often each row is drawn in resample `b` of a stratified bootstrap: goods from goods and bads from bads, as many as there are.
 * The same seed and number give the same resample wherever it is drawn.
 * @param outcome n values, 1 good, 0 bad
 * @param seed whole number of at least 0
 * @param b number of the resample, from 0
 * @returns n counts; those of goods add up to the number of goods, those of bads to that of bads
 * @throws NumericError for arguments outside
 * @example stratifiedBootstrap(Uint8Array.of(1, 1, 0, 0), 7, 0) // for instance [2, 0, 1, 1]
 * Source: B. Efron and R. Tibshirani, An Introduction to the Bootstrap, 1993, chapters 6 and 8.
 */
export function stratifiedBootstrap(outcome: Uint8Array, seed: number, b: number): Uint16Array {
  requireOutcome(outcome);
  requireThat(Number.isSafeInteger(seed) && seed >= 0, 'seed', 'a seed is a whole number of at least 0.');
  requireThat(Number.isInteger(b) && b >= 0, 'b', 'the number of a resample is a whole number of at least 0.');
  return drawStratified(strataOf(outcome), seed, b);
}

/**
 * Rows of the goods, then of the bads: what every resample of a study draws from.
 * @param outcome n values, 1 good, 0 bad, checked before
 * @returns two lists of row numbers, ascending
 * @example strataOf(Uint8Array.of(1, 0, 1)) // [[0, 2], [1]]
 */
export function strataOf(outcome: Uint8Array): readonly Uint32Array[] {
  return [1, 0].map((stratum) => {
    const rows = new Uint32Array(outcome.length);
    let size = 0;
    for (let i = 0; i < outcome.length; i++) if (outcome[i] === stratum) rows[size++] = i;
    return rows.subarray(0, size);
  });
}

/**
 * `stratifiedBootstrap` for strata that are known and arguments that were checked.
 * @param strata as `strataOf` gives them
 * @example drawStratified(strataOf(Uint8Array.of(1, 1, 0)), 7, 0) // for instance [2, 0, 1]
 */
export function drawStratified(strata: readonly Uint32Array[], seed: number, b: number): Uint16Array {
  const random = new Generator(seed, b);
  const counts = new Uint16Array(strata.reduce((sum, rows) => sum + rows.length, 0));
  for (const rows of strata) for (let draw = 0; draw < rows.length; draw++) counts[rows[random.below(rows.length)]]++;
  return counts;
}

/**
 * Counts of `total` draws over cells with the given shares: binomials in turn.
 * @param total whole number of draws, at least 0
 * @param shares of at least 0, one at least above 0 when there is something to draw; they need not add up to 1
 * @returns one count for each share; they add up to `total`
 * @throws NumericError for arguments outside, and for NaN (names its cell)
 * @example multinomial(new Generator(1), 100, [1, 1, 2]) // for instance [27, 22, 51]
 */
export function multinomial(random: Generator, total: number, shares: ArrayLike<number>): Float64Array {
  const cells = shares.length;
  requireFinite('shares', shares);
  // Summed from the end, so that the last cell with a share has exactly 0 after it and takes what is left.
  const after = new Float64Array(cells + 1);
  for (let i = cells - 1; i >= 0; i--) after[i] = after[i + 1] + shares[i];
  requireThat(
    Array.from(shares).every((share) => share >= 0),
    'shares',
    'a share is negative.',
  );
  requireThat(total === 0 || after[0] > 0, 'shares', 'every share is 0.');
  const counts = new Float64Array(cells);
  let remaining = total;
  for (let i = 0; i < cells && remaining > 0; i++) {
    if (shares[i] === 0) continue;
    counts[i] = after[i + 1] === 0 ? remaining : random.binomial(remaining, shares[i] / after[i]);
    remaining -= counts[i];
  }
  return counts;
}
