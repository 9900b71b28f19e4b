import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { dateReader, isDateTime, noSuchDate, ordersOfDate } from './dates';

const of = (order: 'day-month-year' | 'month-day-year', missing: string[] = []) => {
  const read = dateReader(order, missing);
  if (read === null) throw new Error('no reader');
  return read;
};

describe('dates in a stated order', () => {
  it('become ISO dates, with one digit or two and each of the signs', () => {
    for (const text of ['03/04/2024', '3/4/2024', '03.04.2024', '3-04-2024']) {
      expect(of('day-month-year')(text)).toBe('2024-04-03');
      expect(of('month-day-year')(text)).toBe('2024-03-04');
    }
  });

  it('are refused where there is no such day', () => {
    const read = of('day-month-year');
    for (const text of [
      '31/04/2024',
      '29/02/2023',
      '29/02/1900',
      '00/01/2024',
      '01/13/2024',
      '1/0/2024',
      '01/01/0000',
      '99/99/9999',
    ])
      expect(read(text), text).toBe(noSuchDate);
    for (const text of ['29/02/2024', '29/02/2000', '31/12/2024', '01/01/0001']) expect(typeof read(text), text).toBe('string');
    expect(of('month-day-year')('13/04/2024')).toBe(noSuchDate);
  });

  it('are nothing else: other forms, two-digit years, two signs, ISO dates', () => {
    const read = of('day-month-year');
    for (const text of ['', '2024-04-03', '03/04/24', '03/04-2024', '3/4/20245', ' 3/4/2024', '3/4/2024 ', '٣/4/2024', '123/4/2024', '03042024', '3,4,2024', '1.2.3.4'])
      expect(read(text), text).toBeNull(); // prettier-ignore
  });

  it('stay as they are where they mean missing, and where no order is stated', () => {
    const read = of('day-month-year', ['NA', '00/00/0000', '01/01/1900']);
    expect([read('00/00/0000'), read('01/01/1900'), read('1/1/1900')]).toEqual([null, null, '1900-01-01']);
    expect(dateReader(undefined, [])).toBeNull();
    expect(dateReader('year-month-day', [])).toBeNull();
  });

  it('are days in one order, in both or in none', () => {
    expect(ordersOfDate('18-58-9762')).toEqual({ dayFirst: false, monthFirst: false });
    expect(ordersOfDate('31/04/2024')).toEqual({ dayFirst: false, monthFirst: false });
    expect(ordersOfDate('29.02.2024')).toEqual({ dayFirst: true, monthFirst: false });
    expect(ordersOfDate('03/04/24')).toBeNull();
    expect(ordersOfDate('2024-04-03')).toBeNull();
  });

  it('come back from every day as the calendar of the language has it', () => {
    const day = fc.date({ min: new Date('0001-01-01T00:00:00Z'), max: new Date('9999-12-31T00:00:00Z'), noInvalidDate: true });
    fc.assert(
      fc.property(day, fc.constantFrom('/', '.', '-'), fc.boolean(), (one, sign, padded) => {
        const iso = one.toISOString().slice(0, 10);
        const [year, month, date] = iso.split('-').map((part, place) => (padded || place === 0 ? part : String(Number(part))));
        expect(of('day-month-year')([date, month, year].join(sign))).toBe(iso);
        expect(of('month-day-year')([month, date, year].join(sign))).toBe(iso);
        const either = Number(date) <= 12;
        expect(ordersOfDate([date, month, year].join(sign))).toEqual({ dayFirst: true, monthFirst: either });
        expect(ordersOfDate([month, date, year].join(sign))).toEqual({ dayFirst: either, monthFirst: true });
      }),
    );
  });
});

describe('dates with a time', () => {
  const read = dateReader(undefined, ['NA', '1900-01-01 00:00:00'], 'day');
  const times = [
    '10:00',
    '9:05',
    '10:00:00',
    '23:59:60',
    '10:00:00.5',
    '10:00:00,123456',
    '10:00Z',
    '10:00:00+01:00',
    '10:00:00 -0530',
    '00:00:00.000+01',
  ];

  it('become the day that is written, and so do dates with the year first', () => {
    for (const time of times)
      for (const text of [`2024-04-03 ${time}`, `2024-04-03T${time}`, `2024/04/03 ${time}`, `2024.4.3T${time}`]) {
        expect(read?.(text), text).toBe('2024-04-03');
        expect(isDateTime(text), text).toBe(true);
      }
    for (const text of ['2024/04/03', '2024.04.03', '2024-4-3', '2024/4/03']) expect(read?.(text), text).toBe('2024-04-03');
    // No zone moves the day.
    expect(read?.('2024-04-03T23:30:00-05:00')).toBe('2024-04-03');
  });

  it('follow the stated order, and are nothing without one', () => {
    for (const time of times) {
      expect(dateReader('day-month-year', [], 'day')?.(`03/04/2024 ${time}`)).toBe('2024-04-03');
      expect(dateReader('month-day-year', [], 'day')?.(`3.4.2024 ${time}`)).toBe('2024-03-04');
      expect(read?.(`03/04/2024 ${time}`)).toBeNull();
      expect(ordersOfDate(`13/04/2024 ${time}`)).toEqual({ dayFirst: true, monthFirst: false });
    }
    expect(dateReader('day-month-year', [])?.('03/04/2024 10:00')).toBeNull();
    expect(dateReader('day-month-year', [], 'day')?.('1/12/2024')).toBe('2024-12-01');
  });

  it('are refused where there is no such day or time', () => {
    for (const text of [
      '2024-02-30 10:00',
      '2024-13-01T10:00',
      '2023/02/29',
      '2024-04-03 24:00',
      '2024-04-03 10:60',
      '2024-04-03 10:00:61',
    ])
      expect(read?.(text), text).toBe(noSuchDate);
    expect(read?.('1900-01-01 00:00:00')).toBeNull();
  });

  it('are nothing else', () => {
    for (const text of ['2024-04-03', '2024-02-31', '2024-04-03 ', '2024-04-03  10:00', '2024-04-03 10', '2024/04-03', '24/04/03', '2024-04-03 10:00 am', '2024-04-03-0017', '2024-04-03T', `2024-04-03 10:00:00.${'1'.repeat(10)}`, '٢٠٢٤/04/03', 'NA'])
      expect(read?.(text), text).toBeNull();
    expect(dateReader(undefined, [], 'text')).toBeNull();
  }); // prettier-ignore
});
