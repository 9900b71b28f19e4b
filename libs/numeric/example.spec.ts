import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import * as numeric from './index';

/** The README's example, taken from the README itself and run. */
const example = /```ts\n([\s\S]*?)```/.exec(readFileSync(new URL('./README.md', import.meta.url), 'utf8'))?.[1] ?? '';

describe('the example of the README', () => {
  it('runs as printed', () => {
    const printed: unknown[] = [];
    const names = Object.keys(numeric);
    // oxlint-disable-next-line typescript/no-implied-eval -- the text of the README is the code under test
    const body = new Function(...names, 'console', example);
    body(...names.map((name) => (numeric as Record<string, unknown>)[name]), {
      log: (...values: unknown[]) => printed.push(...values),
    });
    const [informationValue, points, area] = printed as [number, number[], number];
    const byHand = [
      [0.12, 0.4],
      [0.26, 50 / 150],
      [0.34, 0.2],
      [0.28, 10 / 150],
    ].reduce((sum, [good, bad]) => sum + (good - bad) * Math.log(good / bad), 0);
    expect(informationValue).toBeCloseTo(byHand, 12);
    // More weight of evidence, more points.
    expect(points).toHaveLength(4);
    points.slice(1).forEach((value, bin) => expect(value).toBeGreaterThan(points[bin]));
    expect(area).toBeGreaterThan(0.65);
  });
});
