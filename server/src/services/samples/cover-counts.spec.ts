import type { DefinitionCounts, WaterfallStep } from '@tallystone/contracts/samples/definition';
import { describe, expect, it } from 'vitest';
import { covered } from './cover-counts';

/** The same sample but for the outcome of its out-of-time rows, of which `bads` in a hundred are bad. */
function counts(bads: number): DefinitionCounts {
  const part = (rows: number, ofThem: number) => ({
    rows,
    goods: rows - ofThem,
    bads: ofThem,
    indeterminates: 0,
    weight: rows,
    badRate: ofThem / rows,
    weightedBadRate: ofThem / rows,
  });
  const [development, holdOut, outOfTime] = [part(500, 50), part(200, 20), part(100, bads)];
  const waterfall: WaterfallStep[] = [];
  let [left, leftGoods, leftBads] = [820, 735 + (100 - bads), 75 + bads];
  const step = (kind: WaterfallStep['kind'], out: number, outGoods: number | null, outBads: number | null): void => {
    left -= out;
    leftGoods -= outGoods ?? 0;
    leftBads -= outBads ?? 0;
    waterfall.push({ kind, label: kind, out, outGoods, outBads, left, leftGoods, leftBads });
  };
  step('source', 0, 0, 0);
  step('exclusion', 20, 15 + 90, 5);
  step('declined', 0, null, null);
  step('out-of-time', outOfTime.rows, outOfTime.goods, outOfTime.bads);
  step('hold-out', holdOut.rows, holdOut.goods, holdOut.bads);
  step('development', 0, 0, 0);
  const partitions = { development, holdOut, outOfTime: { covered: false, ...outOfTime } };
  return { waterfall, partitions, declined: 0, byRule: null, sensitivity: null };
}

describe('counts with out-of-time covered', () => {
  it('are the same whatever its outcome is', () => {
    expect(covered(counts(3))).toEqual(covered(counts(60)));
    expect(JSON.stringify(covered(counts(3)))).toBe(JSON.stringify(covered(counts(97))));
  });

  it('still add up, step by step', () => {
    for (const { waterfall } of [counts(10), covered(counts(10))])
      for (let place = 1; place < waterfall.length; place++) {
        const [before, step] = [waterfall[place - 1], waterfall[place]];
        expect(step.leftGoods).toBe((before.leftGoods ?? NaN) - (step.outGoods ?? 0));
        expect(step.leftBads).toBe((before.leftBads ?? NaN) - (step.outBads ?? 0));
      }
  });

  it('of a definition that was confirmed before goods and bads left were counted stay without them', () => {
    const { waterfall, ...rest } = counts(10);
    const old = waterfall.map(({ leftGoods: _goods, leftBads: _bads, ...step }) => step);
    for (const step of covered({ waterfall: old, ...rest }).waterfall) expect(step).not.toHaveProperty('leftGoods');
  });
});
