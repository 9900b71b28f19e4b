import { requireOutcome, requireThat } from '../checks';
import { Generator } from '../random/generator';

/**
 * How often each row is drawn in resample `b` of a stratified bootstrap: goods from goods and bads from bads, as many as there are.
 * The same seed and number give the same resample wherever it is drawn.
 * @param outcome n values, 1 good, 0 bad
 * @returns n counts
 * @example stratifiedBootstrap(Uint8Array.of(1, 1, 0, 0), 7, 0) // for instance [2, 0, 1, 1]
 * Source: B. Efron and R. Tibshirani, An Introduction to the Bootstrap, 1993, chapters 6 and 8.
 */
export function stratifiedBootstrap(outcome: Uint8Array, seed: number, b: number): Uint16Array {
  requireOutcome(outcome);
  requireThat(Number.isSafeInteger(seed) && seed >= 0, 'seed', 'a seed is a whole number of at least 0.');
  requireThat(Number.isInteger(b) && b >= 0, 'b', 'the number of a resample is a whole number of at least 0.');
  const random = new Generator(seed, b);
  const counts = new Uint16Array(outcome.length);
  for (const stratum of [1, 0]) {
    const rows = new Uint32Array(outcome.length);
    let size = 0;
    for (let i = 0; i < outcome.length; i++) if (outcome[i] === stratum) rows[size++] = i;
    for (let draw = 0; draw < size; draw++) counts[rows[random.below(size)]]++;
  }
  return counts;
}

/** Counts of `total` draws over cells with the given shares: binomials in turn. Shares need not add up to 1. */
export function multinomial(random: Generator, total: number, shares: ArrayLike<number>): Float64Array {
  const cells = shares.length;
  // Summed from the end, so that the last cell with a share has exactly 0 after it and takes what is left.
  const after = new Float64Array(cells + 1);
  for (let i = cells - 1; i >= 0; i--) after[i] = after[i + 1] + shares[i];
  const counts = new Float64Array(cells);
  let remaining = total;
  for (let i = 0; i < cells && remaining > 0; i++) {
    if (shares[i] === 0) continue;
    counts[i] = after[i + 1] === 0 ? remaining : random.binomial(remaining, shares[i] / after[i]);
    remaining -= counts[i];
  }
  return counts;
}
