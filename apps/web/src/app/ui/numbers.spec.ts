import { bytes, count, duration, fixed, metric, moment, plural, points, share, signed, significant, woe } from './numbers';

describe('numbers', () => {
  it('part thousands with a narrow no-break space and use the minus sign', () => {
    expect(count(24000)).toBe('24\u202F000');
    expect(count(1234567)).toBe('1\u202F234\u202F567');
    expect(fixed(-1234.5, 1)).toBe('\u22121\u202F234.5');
    expect(count(999)).toBe('999');
  });

  it('have the decimals of their kind', () => {
    expect(metric(0.7741)).toBe('0.774');
    expect(woe(-0.224)).toBe('\u22120.22');
    expect(points(-6.4)).toBe('\u22126');
    expect(share(0.141)).toBe('14.1\u202F%');
    expect(share(0.5, 0)).toBe('50\u202F%');
  });

  it('write a dash where there is no value, and zero where it is zero', () => {
    for (const nothing of [null, undefined, Number.NaN]) {
      expect(metric(nothing)).toBe('\u2013');
      expect(share(nothing)).toBe('\u2013');
      expect(significant(nothing)).toBe('\u2013');
    }
    expect(metric(0)).toBe('0.000');
    expect(woe(-0.001)).toBe('0.00');
  });

  it('keep significant digits', () => {
    expect(significant(0.0095123, 2)).toBe('0.0095');
    expect(significant(4.2e-13, 1)).toBe('4e\u221213');
    expect(significant(12345.6, 3)).toBe('12\u202F346');
    expect(significant(0)).toBe('0');
  });

  it('show the sign of a difference', () => {
    expect(signed(0.0004, 4)).toBe('+0.0004');
    expect(signed(-0.02, 2)).toBe('\u22120.02');
    expect(signed(0, 2)).toBe('0.00');
    expect(signed(0.00001, 2)).toBe('0.00');
  });

  it('write sizes, times and counts for people', () => {
    expect(bytes(107_000_000)).toBe('107\u202FMB');
    expect(bytes(999)).toBe('999\u202Fbytes');
    expect(duration(75)).toBe('1\u202Fmin 15\u202Fs');
    expect(duration(3720)).toBe('1\u202Fh 2\u202Fmin');
    expect(plural(1, 'row')).toBe('1 row');
    expect(plural(8, 'characteristic')).toBe('8 characteristics');
    expect(moment(null)).toBe('\u2013');
  });
});
