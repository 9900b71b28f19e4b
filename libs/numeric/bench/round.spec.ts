import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { digitsOf, rounderNear, snapped } from './round';

describe('round numbers', () => {
  it('are told by their significant digits', () => {
    expect([0, 7, 30, 1500, -0.025, 33.4, 1e21, 1 / 3].map(digitsOf)).toEqual([0, 1, 1, 2, 2, 3, 1, 16]);
  });

  it('are found between two limits, nearest first among the equally round', () => {
    expect(rounderNear(33.4, 31, 37)).toBe(33);
    expect(rounderNear(33.4, 28, 37)).toBe(30);
    expect(rounderNear(1987.5, 1500, 2400)).toBe(2000);
    expect(rounderNear(-0.4, -3, 2)).toBe(0);
    expect(rounderNear(0, -3, 2)).toBeNull();
    expect(rounderNear(30, 28, 33)).toBeNull();
    expect(rounderNear(0.123, 0.1229, 0.1231)).toBeNull();
  });

  it('lie inside the limits and are rounder than what they stand for', () => {
    fc.assert(
      fc.property(fc.double({ min: -1e6, max: 1e6, noNaN: true }), fc.double({ min: 1e-3, max: 1e3, noNaN: true }), (value, width) => {
        const found = rounderNear(value, value - width, value + width);
        if (found === null) return;
        expect(found).toBeGreaterThan(value - width);
        expect(found).toBeLessThan(value + width);
        expect(digitsOf(found)).toBeLessThan(digitsOf(value));
      }),
    );
  });

  it('draw a cut to them within reach alone', () => {
    const places = [{ value: 29.5, away: 1 }, { value: 30, away: 4 }, { value: 0, away: 40 }, { value: 31, away: 3 }]; // prettier-ignore
    expect(snapped(places, 10)?.value).toBe(30);
    expect(snapped(places, 2)?.value).toBe(29.5);
    expect(snapped(places, 0)?.value).toBe(29.5);
    expect(snapped(places, 100)?.value).toBe(0);
    expect(snapped([], 10)).toBeNull();
  });
});
