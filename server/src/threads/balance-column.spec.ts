import { describe, expect, it } from 'vitest';
import { sourceOf } from '../replay/source';
import { BAD, DEVELOPMENT, GOOD, HOLD_OUT, INDETERMINATE, OUT_OF_TIME } from '../replay/types';
import { type BalancePayload, balanceColumn, readBalance } from './balance-column';
import type { TaskControl } from './task';

const control: TaskControl = { cancelled: () => false, progress: () => undefined, transfer: () => undefined };
const data = { sha256: null, delimiter: ',', encoding: 'utf-8', decimal: '.', thousands: null, trim: true, missing: ['', 'NA'] } as const;

async function balance(column: BalancePayload['column'], texts: string[], partition: number[], outcome: number[]) {
  const source = sourceOf({ x: texts }).column('x');
  if (!source) throw new Error('there is such a column');
  const prepared = { partition: Uint8Array.from(partition), outcome: Uint8Array.from(outcome) };
  return balanceColumn({ column, source, data: { ...data, missing: [...data.missing] }, prepared }, control);
}

describe('balance of one characteristic', () => {
  it('is the stability index of the classes, worked by hand', () => {
    // (0.4 - 0.5) ln(0.4 / 0.5) + (0.6 - 0.5) ln(0.6 / 0.5)
    const reading = readBalance(['a', 'b'], Float64Array.of(50, 50), Float64Array.of(40, 60));
    expect(reading).toMatchObject({ rows: 100, classes: 2, smoothed: false, largest: { development: 0.5 } });
    expect(reading?.index).toBeCloseTo(0.1 * Math.log(1.5), 12);
    // 3.841459 is the 95 % point of chi-square with 1 degree of freedom (any table of it).
    expect(reading?.criticalValue).toBeCloseTo(3.841459 * 0.02, 7);
  });

  it('puts classes with few expected rows together, and never one that vanished', () => {
    const labels = ['a', 'b', 'c', 'd'];
    const small = readBalance(labels, Float64Array.of(500, 494, 3, 3), Float64Array.of(500, 494, 6, 0));
    expect(small).toMatchObject({ classes: 3, smoothed: false });
    const vanished = readBalance(labels, Float64Array.of(400, 400, 200, 0), Float64Array.of(500, 500, 0, 0));
    expect(vanished).toMatchObject({ classes: 3, smoothed: true, largest: { label: 'c', development: 0.2, compared: 0 } });
    expect(vanished?.index).toBeGreaterThan(0.25);
    expect(readBalance(labels, Float64Array.of(1, 0, 0, 0), new Float64Array(4))).toBeNull();
    expect(readBalance(labels, Float64Array.of(9, 0, 0, 0), Float64Array.of(9, 0, 0, 0))).toMatchObject({ classes: 1, index: 0, pValue: null });
  });

  it('cuts numbers by the tenths of development, with special codes and missing in classes of their own', async () => {
    const values = Array.from({ length: 400 }, (_, row) => (row % 8 === 0 ? '-999' : row % 8 === 1 ? 'NA' : String(row % 100)));
    const partition = values.map((_, row) => (row < 200 ? DEVELOPMENT : HOLD_OUT));
    const column = { column: 'x', kind: 'numeric', special: [{ label: 'no record', values: [-999] }] } as const;
    const found = await balance({ ...column, special: [{ label: 'no record', values: [-999] }] }, values, partition, values.map((_, row) => row % 2));
    // Ten classes, the code, and missing; hold-out repeats development but for the phase of the codes.
    expect(found.holdOut).toMatchObject({ rows: 200, classes: 12, smoothed: false });
    expect(found.holdOut?.index).toBeLessThan(0.1);
    expect(found.outOfTime).toBeNull();
  });

  it('sees known outcomes alone, and is the same whatever they are', async () => {
    const texts = Array.from({ length: 300 }, (_, row) => (row % 3 === 0 ? 'rent' : 'owner'));
    const partition = texts.map((_, row) => (row < 200 ? DEVELOPMENT : OUT_OF_TIME));
    const column = { column: 'x', kind: 'categorical' as const, special: [] };
    const goods = await balance(column, texts, partition, texts.map(() => GOOD));
    const mixed = await balance(column, texts, partition, texts.map((_, row) => (row % 5 === 0 ? BAD : GOOD)));
    expect(mixed).toEqual(goods);
    const fewer = await balance(column, texts, partition, texts.map((_, row) => (row >= 290 ? INDETERMINATE : GOOD)));
    expect(fewer.outOfTime?.rows).toBe(90);
  });
});
