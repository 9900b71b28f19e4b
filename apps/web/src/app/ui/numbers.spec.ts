import {
  binWords,
  bytes,
  count,
  day,
  duration,
  fixed,
  metric,
  moment,
  pValue,
  plural,
  points,
  share,
  signed,
  significant,
  valueWords,
  woe,
  written,
} from './numbers';

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

  it('say of a p-value below a thousandth no more than that', () => {
    expect(pValue(0.0421)).toBe('p = 0.042');
    expect(pValue(5.3e-8)).toBe('p < 0.001');
    expect(pValue(0)).toBe('p < 0.001');
    expect(pValue(null)).toBe('\u2013');
  });

  it('write numbers that come as text with all their digits, and leave other text alone', () => {
    expect(written('-12450.50')).toBe('\u221212\u202F450.50');
    expect(written(0.00025)).toBe('0.00025');
    expect(written(1e21)).toBe('1e21');
    expect(written('1e-7')).toBe('1e\u22127');
    expect(written('35-44')).toBe('35-44');
  });

  it('write the numbers of a bin, and leave categories alone', () => {
    expect(binWords('under -244')).toBe('under \u2212244');
    expect(binWords('-244 to under 1250.5')).toBe('\u2212244 to under 1\u202F250.5');
    expect(binWords('12450 and over')).toBe('12\u202F450 and over');
    expect(binWords('over 1e-7 to 25')).toBe('over 1e\u22127 to 25');
    for (const label of ['35-44', 'broker, web-2000', 'no bureau record', 'missing']) expect(binWords(label)).toBe(label);
    // Of hundreds of categories the first; a single long name, and a list that can be read, stay.
    const towns = (count: number): string => Array.from({ length: count }, (_, i) => `Town ${100 + i}`).join(', ');
    expect(binWords(towns(500))).toMatch(/^Town 100, Town 101, .*, Town 111 and others$/);
    for (const label of [towns(20), 'x'.repeat(300)]) expect(binWords(label)).toBe(label);
  });

  it('write the values of a sentence, and leave words with digits alone', () => {
    expect(valueWords('Cut moved from 18762.23 to -244.')).toBe('Cut moved from 18\u202F762.23 to \u2212244.');
    expect(valueWords('Cuts as they were: 1000, 25000.5, 1e-7')).toBe('Cuts as they were: 1\u202F000, 25\u202F000.5, 1e\u22127');
    for (const sentence of ['web-2000 and 35-44', 'Nothing at all']) expect(valueWords(sentence)).toBe(sentence);
  });

  it('keep a date on one line', () => {
    expect(day('2026-11-03T12:00:00Z')).toBe('3\u00A0November\u00A02026');
    expect(moment('2026-11-03T12:00:00Z')).toMatch(/^3\u00A0Nov\u00A02026, \d\d:00$/);
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
