import type { ResultCharacteristic } from '@tallystone/contracts/result/types';
import type { Specification } from '@tallystone/contracts/specification/types';
import { describe, expect, it } from 'vitest';
import { notMonotone } from './not-monotone';

const bin = (woe: number, rows = 100) => ({ label: '', rows, goods: rows / 2, bads: rows / 2, woe, points: 0, pointsRounded: 0 });
const entry = (woe: readonly number[], coefficient: number | null = 0.8): Omit<ResultCharacteristic, 'column'> => ({
  informationValue: 0.1,
  coefficient,
  bins: woe.map((one) => bin(one)),
  csi: { holdOut: null, outOfTime: null },
});
const found = (of: Omit<ResultCharacteristic, 'column'>, edges: number[], more: object = {}): string[] =>
  notMonotone(
    { characteristics: [{ column: 'age', kind: 'numeric', edges, coding: 'woe', ...more }] } as unknown as Specification,
    { characteristics: [{ column: 'age', ...of }] },
  );

describe('characteristics whose WOE is not monotone', () => {
  it('are those that turn along the values; bins of special codes and missing, which come after, do not count', () => {
    expect(found(entry([-0.5, 0.1, 0.6, -2]), [20, 30])).toEqual([]);
    expect(found(entry([-0.5, 0.6, 0.1, 2]), [20, 30])).toEqual(['age']);
    expect(found(entry([0.6, -0.5, 0.1]), [20, 30])).toEqual(['age']);
    expect(found(entry([0.6, -0.5]), [20])).toEqual([]);
  });

  it('are none that the fit did not keep, that have groups, or that nobody is in', () => {
    expect(found(entry([-0.5, 0.6, 0.1], 0), [20, 30])).toEqual([]);
    expect(found(entry([-0.5, 0.6, 0.1]), [20, 30], { kind: 'categorical' })).toEqual([]);
    expect(found(entry([-0.5, 0.6, 0.1]), [20, 30], { coding: 'linear' })).toEqual([]);
    expect(found({ ...entry([]), bins: [bin(-0.5), bin(0.9, 0), bin(0.1)] }, [20, 30])).toEqual([]);
    expect(found({ ...entry([-0.5, 0.6, 0.1], null), bins: [-0.5, 0.6, 0.1].map((woe) => ({ ...bin(woe), coefficient: 0.1 })) }, [20, 30])).toEqual(['age']);
  });
});
