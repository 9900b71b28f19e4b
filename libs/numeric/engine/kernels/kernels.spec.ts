import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { kernelModule } from '../../../../tools/kernels.mjs';
import { Generator } from '../../random/generator';
import { randomProblem } from '../../testing/problems';
import { codedColumns, type CodedProblem } from '../coded-columns';
import { pointOf, type Lane } from '../lane';
import { layOut } from '../layout';
import { Passes } from '../passes';
import { fullStandardisation } from '../standardisation';
import { joinMachine, makeMachine, type KernelKind } from './kernels';
import { exp32, exp64, log64, loss32 } from './plain-functions';

/** Coded columns and two linear ones, weights and an offset. */
function problem(): CodedProblem {
  const random = new Generator(5);
  const { columns, outcome } = randomProblem(4, 1500, 7, { mixing: 1, standardize: true });
  const linear = [0, 1].map(() => ({ kind: 'linear' as const, values: Float64Array.from(outcome, () => random.normal()) }));
  return {
    columns: [...codedColumns(columns), ...linear],
    outcome,
    weights: Float64Array.from(outcome, () => Math.round(4 * random.uniform()) / 2),
    offset: Float64Array.from(outcome, () => 0.3 * random.normal()),
    penalty: { mixing: 1, standardize: true },
  };
}

/** Everything that passes give, on one kind of kernels. */
function found(kernels: KernelKind, precision: 'single' | 'double', count: number, counted = false) {
  const of = problem();
  const layout = layOut(of, { kernels, folds: Uint8Array.from(of.outcome, (_, i) => i % 3), byRow: false, counted: true });
  const passes = new Passes(layout);
  const standardisation = fullStandardisation(of, layout);
  const random = new Generator(6);
  const lanes = Array.from({ length: count }, (_, l): Lane => {
    const point = pointOf(of.columns.length);
    point.intercept = random.normal();
    // A lane far out, where exp is held to its bounds.
    for (let j = 0; j < point.t.length; j++) point.t[j] = (l === 1 ? 40 : 0.5) * random.normal();
    return { point, standardisation, leftOut: (l % 4) - 1, heldOut: 0 };
  });
  if (counted) passes.counts.forEach((_, k, counts) => (counts[k] = random.below(4)));
  passes.run(lanes, precision, counted);
  const weighed = counted ? passes.weigh(count) : null;
  return {
    lanes: lanes.map(({ point, heldOut }) => ({ point, heldOut })),
    gram: passes.gram(lanes[0].point, standardisation),
    weighed,
  };
}

describe('the kernels in WebAssembly', () => {
  for (const precision of ['single', 'double'] as const) {
    for (const lanes of precision === 'single' ? [1, 6, 12, 16] : [1, 3, 5, 8]) {
      it(`give the bits of the plain ones: ${precision} precision, ${lanes} lanes`, () => {
        expect(found('fastest', precision, lanes)).toEqual(found('plain', precision, lanes));
      });
    }
  }

  it('give the bits of the plain ones with rows counted by lane', () => {
    expect(found('fastest', 'single', 7, true)).toEqual(found('plain', 'single', 7, true));
  });

  it('are there: the fastest kind is not the plain one', () => {
    expect(makeMachine(1000).buffer.byteLength).toBe(65536);
    const shared = makeMachine(1000, 'fastest', true);
    expect(shared.buffer).toBeInstanceOf(SharedArrayBuffer);
    expect(joinMachine(shared.shared).buffer).toBe(shared.buffer);
    expect(makeMachine(1000, 'plain').shared).toBeNull();
  });

  it('are what their source compiles to', async () => {
    expect(readFileSync(new URL('./bytes.ts', import.meta.url), 'utf8')).toBe(await kernelModule());
  }, 120_000);
});

describe('exp and log by basic operations', () => {
  const grid = (from: number, to: number): number[] => Array.from({ length: 4001 }, (_, k) => from + ((to - from) * k) / 4000);

  it('single precision: within a few units of the last place', () => {
    // The polynomial's 9e-8, half a unit (6e-8) each for a few roundings, and the argument's own rounding times its size.
    for (const x of grid(-20, 20).map(Math.fround))
      expect(Math.abs(exp32(x) / Math.exp(x) - 1)).toBeLessThan(3e-7 + 6e-8 * Math.abs(x));
    for (const m of grid(-20, 20).map(Math.fround)) {
      const wanted = Math.log1p(Math.exp(-Math.abs(m))) + Math.max(0, -m);
      expect(Math.abs(loss32(m, exp32(m)) / wanted - 1)).toBeLessThan(3e-7 + 6e-8 * Math.abs(m));
    }
  });

  it('double precision: within a few units of the last place', () => {
    for (const x of grid(-690, 690)) expect(Math.abs(exp64(x) / Math.exp(x) - 1)).toBeLessThan(1e-15);
    for (const u of grid(0, 1)) expect(Math.abs(log64(u) - Math.log1p(u))).toBeLessThan(4e-16);
  });
});
