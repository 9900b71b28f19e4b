import { AskedConstraints, type Fine } from '@tallystone/contracts/binnings/bins';
import { weightOfEvidence } from '@tallystone/numeric/binning/weight-of-evidence';
import { describe, expect, it } from 'vitest';
import { classFine, summarise } from './automatic';

const slots = (goods: number[], bads: number[]) => ({ rows: goods.map((good, slot) => good + bads[slot]), goods, bads });
const none = slots([0, 0, 0, 0, 0], [0, 0, 0, 0, 0]);
/** Four fine classes cut at 10, 20 and 30, and nothing missing. */
const fineOf = (development: Fine['development']): Fine => ({
  kind: 'numeric',
  edges: [10, 20, 30],
  closed: 'left',
  range: [1, 39],
  categories: [],
  special: [],
  development,
  holdOut: none,
  outOfTime: null,
});

describe('a monotone trend', () => {
  // Risk is highest in the second class. Rising WOE is best cut at 20, falling WOE at 10; the two criteria do not agree which of them is better.
  const development = slots([100, 30, 140, 150, 0], [10, 100, 30, 50, 0]);
  const asked = (criterion: 'information value' | 'deviance') =>
    AskedConstraints.parse({ trend: 'monotone', criterion, smallestShare: 0, smallestGoods: 0, smallestBads: 0, mostBins: 8, smallestDifference: 0 });
  const rising = { goods: [130, 290], bads: [110, 80] };
  const falling = { goods: [100, 320], bads: [10, 180] };
  const value = ({ goods, bads }: typeof rising): number => weightOfEvidence(goods, bads, { amount: 0, when: 'never' }).informationValue;
  /** From its definition over rows. */
  const deviance = ({ goods, bads }: typeof rising): number =>
    goods.reduce((sum, good, bin) => sum - 2 * (good * Math.log(good / (good + bads[bin])) + bads[bin] * Math.log(bads[bin] / (good + bads[bin]))), 0);

  it('is the one that is better by the criterion in force', () => {
    expect(value(falling)).toBeGreaterThan(value(rising));
    expect(deviance(rising)).toBeLessThan(deviance(falling));
    const byValue = classFine(fineOf(development), asked('information value'));
    expect([byValue.constraints.trend, byValue.bins]).toEqual(['falling', expect.objectContaining({ edges: [10] })]);
    const byDeviance = classFine(fineOf(development), asked('deviance'));
    expect([byDeviance.constraints.trend, byDeviance.bins]).toEqual(['rising', expect.objectContaining({ edges: [20] })]);
  });
});

describe('what out-of-time figures show', () => {
  it('is kept apart from what is told while they are covered', () => {
    const development = slots([180, 170, 150, 120, 0], [20, 30, 50, 80, 0]);
    const holdOut = slots([90, 85, 75, 60, 0], [10, 15, 25, 40, 0]);
    const fine = { ...fineOf(development), holdOut };
    const bins = { kind: 'numeric' as const, edges: [10, 20, 30], special: [], missing: 'own' as const };
    const constraints = { ...AskedConstraints.parse({}), trend: 'any' as const };
    // Safest where it was riskiest.
    const outOfTime = slots([60, 75, 85, 95, 0], [40, 25, 15, 5, 0]);
    const turned = summarise({ fine, outOfTime, months: null }, bins, constraints);
    expect(turned.outOfTimeWarnings).toMatchObject([
      { code: 'reversed-out-of-time', bins: [1, 2, 3], message: expect.stringContaining('The order of risk is reversed out of time, beyond chance') },
    ]);
    // Everything else that is told is the same as when out-of-time says the same as development.
    const steady = summarise({ fine, outOfTime: holdOut, months: null }, bins, constraints);
    expect(steady.outOfTimeWarnings).toEqual([]);
    expect(turned.summary).toEqual(steady.summary);
  });
});
