import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { roundAwayFromZero, scaleToPoints, type Scaling } from './points';

const scaling: Scaling = { pointsToDouble: 25, baseScore: 500, baseOdds: 16, intercept: 'base', rounding: 'nearest' };
const fit = {
  intercept: 1.2,
  terms: [
    { coefficient: 0.8, woe: [-0.6, 0, 0.9] },
    { coefficient: 1.1, woe: [0.4, -0.3] },
  ],
};

describe('scaleToPoints', () => {
  it('puts the base odds at the base score and doubles them in the points asked for', () => {
    const { factor, offset } = scaleToPoints(scaling, fit);
    expect(offset + factor * Math.log(16)).toBeCloseTo(500, 10);
    expect(offset + factor * Math.log(32)).toBeCloseTo(525, 10);
  });

  it('base and spread form give every applicant the same score', () => {
    const finite = fc.double({ min: -3, max: 3, noNaN: true });
    const terms = fc.array(fc.record({ coefficient: finite, woe: fc.array(finite, { minLength: 1, maxLength: 6 }) }), {
      minLength: 1,
      maxLength: 6,
    });
    fc.assert(
      fc.property(finite, terms, (intercept, drawn) => {
        const base = scaleToPoints(scaling, { intercept, terms: drawn });
        const spread = scaleToPoints({ ...scaling, intercept: 'spread' }, { intercept, terms: drawn });
        const first = (points: number[][]): number => points.reduce((sum, bins) => sum + bins[0], 0);
        const eta = drawn.reduce((sum, term) => sum + term.coefficient * term.woe[0], intercept);
        expect(base.basePoints + first(base.points)).toBeCloseTo(base.offset + base.factor * eta, 8);
        expect(first(spread.points)).toBeCloseTo(base.offset + base.factor * eta, 8);
        // Rounding costs at most half a point for each value that is added.
        expect(
          Math.abs(base.basePointsRounded + first(base.pointsRounded) - (base.basePoints + first(base.points))),
        ).toBeLessThanOrEqual(0.5 * (drawn.length + 1));
        spread.neutral.forEach((value) => expect(value).toBeCloseTo(base.basePoints / drawn.length, 10));
      }),
    );
  });

  it('falls back to the base form when nothing is kept', () => {
    const points = scaleToPoints({ ...scaling, intercept: 'spread' }, { intercept: 0.5, terms: [] });
    expect(points.form).toBe('base');
    expect(points.basePointsRounded).toBe(Math.round(points.basePoints));
  });

  it('rounds halves away from zero and knows no minus zero', () => {
    expect([2.5, -2.5, 0.5, -0.5, 1.49, -1.49].map(roundAwayFromZero)).toEqual([3, -3, 1, -1, 1, -1]);
    expect(Object.is(roundAwayFromZero(-0.2), 0)).toBe(true);
  });

  it('refuses what is not a scale', () => {
    expect(() => scaleToPoints({ ...scaling, pointsToDouble: 0 }, fit)).toThrow();
    expect(() => scaleToPoints({ ...scaling, baseOdds: -1 }, fit)).toThrow();
    expect(() => scaleToPoints(scaling, { ...fit, intercept: NaN })).toThrow();
  });
});
