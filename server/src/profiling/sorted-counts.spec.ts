import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { sortCounts } from './sorted-counts';

/** The same by a dictionary. */
function counted(wholes: readonly number[], outcome: readonly number[] | null): number[][] {
  const found = new Map<number, number[]>();
  wholes.forEach((whole, row) => {
    const one = found.get(whole) ?? [whole, 0, 0, 0];
    one[1]++;
    if (outcome?.[row] === 1) one[2]++;
    else if (outcome?.[row] === 0) one[3]++;
    found.set(whole, one);
  });
  return [...found.values()].sort((a, b) => a[0] - b[0]);
}

const most = 999_999_999;
const near = fc.integer({ min: -50, max: 50 });
const numbers = fc.oneof(
  fc.array(near, { maxLength: 60 }),
  fc.array(fc.oneof(near, fc.integer({ min: 0, max: 40_000_000 })), { maxLength: 60 }),
  fc.array(fc.oneof(near, fc.integer({ min: -most, max: most }), fc.constantFrom(-most, most)), { maxLength: 60 }),
);

describe('whole numbers counted with their outcomes', () => {
  it('are counted as a dictionary counts them, near together or as far apart as can be', () => {
    fc.assert(
      fc.property(numbers, fc.infiniteStream(fc.constantFrom(0, 1, 2, 255)), fc.boolean(), (wholes, stream, known) => {
        const outcome = known ? wholes.map(() => stream.next().value) : null;
        const found = sortCounts(Int32Array.from(wholes), outcome && Uint8Array.from(outcome));
        expect(
          Array.from({ length: found.length }, (_, place) => [
            found.wholes[place],
            found.counts[place],
            found.goods[place],
            found.bads[place],
          ]),
        ).toEqual(counted(wholes, outcome));
      }),
      { numRuns: 1000, examples: [[[-most, most, 0, most], fc.sample(fc.infiniteStream(fc.constant(1)), 1)[0], true]] },
    );
  });
});
