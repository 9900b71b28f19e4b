import { Generator } from '@tallystone/numeric';
import type { CodedColumn } from '@tallystone/numeric/engine/coded-columns';

/** An invented binned sample: columns in correlated blocks, half of them without any effect. */
export interface BenchSample {
  readonly columns: CodedColumn[];
  readonly outcome: Uint8Array;
  /** From 1. */
  readonly folds: Uint8Array;
}

const BLOCK = 5;

/** The upper quantiles of a standard normal that cut a column into its bins. */
const CUTS: Record<number, readonly number[]> = {
  3: [-0.7, 0.6],
  4: [-0.9, 0, 0.9],
  5: [-1.1, -0.4, 0.3, 1],
  6: [-1.3, -0.6, 0, 0.6, 1.2],
  7: [-1.4, -0.8, -0.3, 0.2, 0.7, 1.4],
  8: [-1.5, -0.9, -0.4, 0, 0.4, 0.9, 1.6],
  9: [-1.6, -1, -0.6, -0.2, 0.2, 0.6, 1, 1.7],
  10: [-1.7, -1.2, -0.8, -0.4, 0, 0.3, 0.7, 1.1, 1.8],
};

/**
 * @param rows and columns its size; the same seed gives the same sample
 * @param bad share of bads aimed at
 */
export function benchSample(rows: number, columns: number, seed: number, bad = 0.12): BenchSample {
  const chance = new Generator(seed, 1);
  const eta = new Float64Array(rows);
  const shared = new Float64Array(rows);
  const made: CodedColumn[] = [];
  const useful = columns / 2;
  for (let j = 0; j < columns; j++) {
    if (j % BLOCK === 0) for (let i = 0; i < rows; i++) shared[i] = roughNormal(chance);
    const load = 0.3 + 0.5 * chance.uniform();
    const own = Math.sqrt(1 - load * load);
    const bins = 3 + chance.below(8);
    const cuts = CUTS[bins];
    const spread = 0.3 + 0.6 * chance.uniform();
    // Weights of evidence: rising with the bins, not quite evenly.
    const values = Float64Array.from(
      { length: bins },
      (_, b) => spread * ((b - (bins - 1) / 2) / (bins / 3) + 0.2 * (chance.uniform() - 0.5)),
    );
    // Every other column has no effect.
    const slope = j % 2 === 0 ? (0.4 + 0.8 * chance.uniform()) * Math.sqrt(10 / useful) : 0;
    const codes = new Uint8Array(rows);
    for (let i = 0; i < rows; i++) {
      const z = load * shared[i] + own * roughNormal(chance);
      let code = 0;
      while (code < cuts.length && z >= cuts[code]) code++;
      codes[i] = code;
      eta[i] += slope * values[code];
    }
    made.push({ kind: 'coded', codes, values });
  }
  const intercept = Math.log((1 - bad) / bad) + 0.6;
  const outcome = Uint8Array.from(eta, (value) => (chance.uniform() < 1 / (1 + Math.exp(-intercept - value)) ? 1 : 0));
  const folds = Uint8Array.from(eta, () => 1 + chance.below(10));
  return { columns: made, outcome, folds };
}

/** The sum of four uniform numbers of 8 bits, standardised: near enough to normal for a benchmark and ten times as fast. */
function roughNormal(chance: Generator): number {
  const bits = chance.uint32();
  const sum = (bits & 255) + ((bits >>> 8) & 255) + ((bits >>> 16) & 255) + (bits >>> 24);
  return (sum - 510) / 147.8;
}
