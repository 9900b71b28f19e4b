import { describe, expect, it } from 'vitest';
import { judgeFormat, numberReader } from './numbers';

const plain = numberReader({ decimal: '.', thousands: null });

describe('the grammar of a number', () => {
  it('takes sign, digits, decimals and exponent', () => {
    for (const [text, value] of [
      ['0', 0],
      ['-0', 0],
      ['+12', 12],
      ['-3.25', -3.25],
      ['1e3', 1000],
      ['2.5E-2', 0.025],
      ['007', 7],
    ] as const) {
      expect(plain.read(text)).toBe(value);
    }
  });

  it('takes nothing else, and never makes zero or infinity of it', () => {
    for (const text of [
      '',
      ' ',
      'NaN',
      'Inf',
      '-Infinity',
      '1e309',
      '1e-400',
      '0x10',
      '1_000',
      '1,5',
      '1 000',
      '.5',
      '5.',
      '--1',
      '1e',
      '٣',
      '１２',
      '1\n',
      '0b1',
      '12a',
    ]) {
      expect(plain.read(text), JSON.stringify(text)).toBeNaN();
    }
  });

  it('says why', () => {
    const faults = ['', '  ', 'nan', '-Inf', '1e309', '1e-400', '0x1F', '٣٤', 'abc'].map((text) => plain.fault(text));
    expect(faults).toEqual([
      'empty',
      'blank',
      'not-a-number-word',
      'infinity',
      'too-large',
      'too-small',
      'hexadecimal',
      'other-digits',
      'text',
    ]);
  });

  it('takes a thousands sign where one is stated, in groups of three only', () => {
    const german = numberReader({ decimal: ',', thousands: '.' });
    expect(german.read('1.234.567,5')).toBe(1234567.5);
    expect(german.read('1234,5')).toBe(1234.5);
    for (const text of ['1.23', '12.34,5', '1,234.5', '.123']) expect(german.read(text)).toBeNaN();
  });
});

describe('judging a column', () => {
  it('judges from all texts and says when two readings are possible', () => {
    expect(judgeFormat(['1,5', '2,25']).format).toEqual({ decimal: ',', thousands: null });
    expect(judgeFormat(['1.234,50', '12,00']).format).toEqual({ decimal: ',', thousands: '.' });
    expect(judgeFormat(['1,234', '5,678']).ambiguous).toEqual({ decimal: '.', thousands: ',' });
    expect(judgeFormat(['1,234', '5,678', '1,234.5']).ambiguous).toBeNull();
    const mixed = judgeFormat(['1.5', '2.5', '3,5'], [10, 10, 1]);
    expect(mixed).toMatchObject({ format: { decimal: '.', thousands: null }, numbers: 20, others: 1, examples: ['3,5'] });
  });

  it('asks about a decimal sign that may part thousands, and only then', () => {
    const asked = (...texts: string[]): boolean => judgeFormat(texts).ambiguous !== null;
    expect(asked('1.100', '990', '0', '-12.345')).toBe(true);
    // Codes in nines are no amounts.
    expect(asked('1.100', '-9999')).toBe(true);
    for (const other of ['0.123', '1.5', '1.1234', '1234.567', '01.234', '1.234.567', '1500', '1.234e3'])
      expect(asked('1.100', other), other).toBe(false);
    expect(asked('990', '12')).toBe(false);
    expect(judgeFormat(['1,100', '990']).ambiguous).toEqual({ decimal: '.', thousands: ',' });
  });

  it('knows blanks that do not break and apostrophes between thousands, with either decimal sign', () => {
    for (const sign of ['\u00a0', '\u202f', "'", '\u2019'])
      for (const decimal of ['.', ','] as const) {
        const texts = ['1', '12', '123'].map((whole) => `${whole}${sign}000${decimal}50`);
        const { format, numbers } = judgeFormat(texts);
        // Typeset or typed, it is one sign.
        expect(format).toEqual({ decimal, thousands: sign === '\u2019' ? "'" : sign });
        expect([numbers, ...texts.map((text) => numberReader(format).read(text))]).toEqual([3, 1000.5, 12_000.5, 123_000.5]);
      }
    const swiss = numberReader({ decimal: '.', thousands: "'" });
    expect(swiss.read("1’000'000.5")).toBe(1_000_000.5);
    for (const text of ['1’00.5', '’100', '1’000’', "1'’000"]) expect(swiss.read(text), text).toBeNaN();
    expect(numberReader({ decimal: '.', thousands: null }).read('1’000')).toBeNaN();
  });
});
