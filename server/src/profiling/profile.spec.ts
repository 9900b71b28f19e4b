import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import { describe, expect, it } from 'vitest';
import { numberReader } from '../reading/index';
import { sourceOf, type TextColumn } from '../replay/source';
import { DuplicateRows } from './duplicates';
import { isIsoDate } from './kind';
import { suspectLeakage } from './leakage';
import { hashText, personalColumn } from './personal';
import { profileColumn } from './profile-column';

const choices: ReadingChoices = {
  delimiter: ',',
  encoding: 'utf-8',
  decimal: '.',
  thousands: null,
  trim: true,
  missing: ['', 'NA'],
};
const column = (values: readonly string[]): TextColumn => sourceOf({ c: values }).column('c') as TextColumn;
const profile = (values: readonly string[], name = 'c', chosen = choices) => profileColumn(name, 0, column(values), chosen, null);
const codes = (values: readonly string[], name = 'c', chosen = choices): string[] =>
  profile(values, name, chosen).flags.map((flag) => flag.code);
const many = (count: number, make: (k: number) => string): string[] => Array.from({ length: count }, (_, k) => make(k));

describe('what the quality table says of a column', () => {
  it('counts missing tokens apart, never as zero', () => {
    const found = profile(['1', '', 'NA', '0', '2', '']);
    expect(found).toMatchObject({ kind: 'numeric', missing: 3, distinct: 3, rows: 6 });
    expect(found.missingTokens).toEqual([
      { value: '', count: 2 },
      { value: 'NA', count: 1 },
    ]);
    expect(found.numeric).toMatchObject({ smallest: 0, largest: 2, mean: 1 });
  });

  // By hand: place p(n - 1) of 1 2 3 4 10 20, straight between neighbours; squares about 20/3 add up to 790/3, over n - 1 = 5.
  it('gives type 7 quantiles and the standard deviation', () => {
    const { numeric } = profile(['10', '1', '3', '2', '20', '4']);
    const at = (share: number): number | undefined => numeric?.quantiles.find((quantile) => quantile.share === share)?.value;
    expect([at(0.25), at(0.5), at(0.75)]).toEqual([2.25, 3.5, 8.5]);
    expect(numeric?.standardDeviation).toBeCloseTo(Math.sqrt(158 / 3), 12);
  });

  it('lets every value fall in one bar of the histogram', () => {
    const { numeric } = profile(many(997, (k) => String(((k * 7919) % 997) / 10)));
    expect(numeric?.histogram.counts.reduce((a, b) => a + b)).toBe(997);
    expect(numeric?.histogram.edges.length).toBe((numeric?.histogram.counts.length ?? 0) + 1);
  });

  it.each([
    ['NaN', '“not a number”'],
    ['Inf', 'infinity'],
    ['1e309', 'too large for a number'],
    ['0x10', 'hexadecimal'],
    ['\u0664\u0662', 'digits of another script'],
  ])('counts %s in a column of numbers and says why it is none', (token, why) => {
    const found = profile([...many(99, String), token]);
    expect(found.kind).toBe('numeric');
    expect(found.flags.find((flag) => flag.code === 'unreadable-numbers')?.finding).toContain(why);
    expect(found.numeric?.largest).toBe(98);
  });

  it('sets constant and empty columns to not used with the reason', () => {
    expect(profile(many(50, () => ''))).toMatchObject({ suggestedRole: 'not used', suggestion: 'All 50 values are missing.' });
    expect(profile(many(50, () => 'x'))).toMatchObject({ suggestedRole: 'not used', suggestion: 'Always "x".' });
  });

  it('asks for the reading choices where numbers are written otherwise', () => {
    expect(codes(many(40, (k) => `${k},5`))).toContain('numbers-as-text');
    expect(
      codes(
        many(40, (k) => `${k},5`),
        'c',
        { ...choices, decimal: ',' },
      ),
    ).toEqual([]);
  });

  it('takes reference numbers in the form of a date for texts, and dates of another order for such', () => {
    const references = many(60, (k) => `${k % 7 === 3 ? '10-07' : `${40 + (k % 50)}-${58 + (k % 9)}`}-${1000 + k * 137}`);
    expect(codes(references)).not.toContain('doubtful-dates');
    const finding = profile(many(60, (k) => `${String((k % 12) + 1).padStart(2, '0')}/${13 + (k % 15)}/2023`)).flags.find(({ code }) => code === 'doubtful-dates')?.finding;
    expect(finding).toContain('(with the month first)');
    expect(finding).toContain('where other columns have another order, write them as YYYY-MM-DD in the file');
  }); // prettier-ignore

  it('names both readings at once where the sign may part thousands', () => {
    const texts = many(60, (k) => `${(k % 9) + 1},${100 + k * 3}`);
    const finding = profile(['7,582', ...texts]).flags.find(({ code }) => code === 'numbers-as-text')?.finding;
    expect(finding).toContain('Numbers such as “7,582”: 7.582 where “,” is the decimal sign, and 7\u202f582 where it parts thousands.');
    expect(finding).toContain('“,” as decimal sign, or “,” as thousands sign with “.” as decimal sign.');
    // A value that has other than three digits after the sign, or a large one without it, leaves one reading.
    for (const other of ['7,58', '12345'])
      expect(profile([...texts, other]).flags.find(({ code }) => code === 'numbers-as-text')?.finding).toContain(
        'Numbers written with “,” as decimal sign (1,100): change the reading choices',
      );
    expect(codes(texts, 'c', { ...choices, thousands: ',' })).toEqual([]);
  });

  it('sets numbers of mixed spelling to not used, with examples of each', () => {
    const found = profile([...many(20, (k) => `${k}.5`), ...many(20, (k) => `${k},5`), '', 'NA']);
    expect(found).toMatchObject({ kind: 'categorical', suggestedRole: 'not used' });
    expect(found.flags.find(({ code }) => code === 'mixed-numbers')).toMatchObject({ weight: 'stop', finding: found.suggestion });
    expect(found.suggestion).toContain('"0.5" 1×, "1.5" 1×, "10.5" 1× and 17 more beside "0,5" 1×');
    // A thousands sign explains both, and words among numbers are categories.
    expect(codes([...many(20, (k) => `${k}.5`), ...many(20, (k) => `${k + 1},500`)])).toContain('numbers-as-text');
    expect(codes([...many(20, String), ...many(9, (k) => `w${k}`)])).toContain('numbers-as-text');
  });

  it('asks about a decimal sign that may part thousands, by all texts of the column', () => {
    const texts = [...many(3000, (k) => String((k % 990) + 1)), ...many(57_000, (k) => `1.${(k % 800) + 100}`)];
    const found = profile(texts);
    expect(found.flags.map(({ code, weight }) => [code, weight])).toEqual([['ambiguous-numbers', 'look']]);
    expect(found.flags[0].finding).toContain('“1.100” is read as 1.1 and may be 1\u202f100: each of the 57\u202f000 values');
    expect(found.flags[0].finding).toContain('(“1.100” 72×, “1.101” 72×, “1.102” 72×)');
    expect(found.flags[0].finding).toContain('read the file again with “.” as thousands sign');
    // One value with another number of decimals, or below one, is an answer; so is a thousands sign that is stated.
    for (const one of ['0.500', '2.5', '1200']) expect(codes([...texts, one]), one).toEqual([]);
    expect(codes(texts, 'c', { ...choices, decimal: ',', thousands: '.' })).toEqual([]);
    expect(codes(many(400, (k) => `0.${k + 100}`))).toEqual([]);
  });

  it('offers what may mean missing among numbers, but no number in another spelling', () => {
    const found = profile([...many(196, String), 'NaN', '0x10', 'NaN', '1,5']);
    expect(found.flags.find(({ code }) => code === 'unreadable-numbers')?.values).toEqual(['NaN', '0x10']);
  });

  it('asks day or month first, and takes ISO dates as certain', () => {
    expect(profile(many(40, (k) => `0${(k % 9) + 1}/04/2024`)).flags[0].finding).toContain(
      'day first or month first cannot be told',
    );
    expect(profile(many(40, (k) => `2024-04-${String((k % 30) + 1).padStart(2, '0')}`))).toMatchObject({
      kind: 'date',
      date: { first: '2024-04-01', last: '2024-04-30' },
    });
    expect([isIsoDate('2023-02-29'), isIsoDate('2024-02-29'), isIsoDate('2024-13-01')]).toEqual([false, true, false]);
  });

  it('suspects -999 and runs of nines, and not the end of a range', () => {
    const withCode = profile([...many(300, (k) => String(k % 120)), ...many(20, () => '-999')]);
    expect(withCode.specialSuspects.map(({ value }) => value)).toEqual(['-999']);
    expect(profile(many(1000, (k) => String(k % 100))).specialSuspects).toEqual([]);
    // Few values, as a count of arrears has.
    const few = profile(many(300, (k) => ['0', '1', '2', '-999', '-996'][k % 5]));
    expect(few.specialSuspects.map(({ value }) => value)).toEqual(['-999', '-996']);
    expect(profile(many(300, (k) => ['-1', '0', '1'][k % 3])).specialSuspects).toEqual([]);
    expect(
      profile([...many(300, (k) => String(k % 40)), ...many(20, () => '9999'), ...many(9, () => '9998')]).specialSuspects[0]
        .value,
    ).toBe('9999');
  });

  it('suggests roles from the headings of a lender', () => {
    const flags = ['0', '1', '0', '0', '1'];
    expect(profile(flags, 'bad').suggestedRole).toBe('outcome');
    expect(profile(flags, 'outcome_12m').suggestedRole).toBe('outcome');
    expect(profile(['declined', 'accepted'], 'decision').suggestedRole).toBe('decision');
    expect(profile(['2024-01-01', '2024-01-02'], 'applied_on').suggestedRole).toBe('application date');
    expect(profile(['f', 'm'], 'gender')).toMatchObject({ suggestedProtected: true });
    expect(profile(['12', '40'], 'account_age_months').flags).toEqual([]);
    expect(profile(['41', '40'], 'age').flags[0].code).toBe('looks-like-protected');
    expect(profile(['1.0', '2.5', '1.0'], 'weight').suggestedRole).toBe('weight');
  });
});

describe('what says when or how much', () => {
  it.each([
    ['2024-01-05 10:%:00', 'doubtful-dates'],
    ['2024-01-05T10:%:00Z', 'doubtful-dates'],
    ['2024-01-05T10:%:00.125+01:00', 'doubtful-dates'],
    ['05/01/2024 10:%:33', 'doubtful-dates'],
    ['\u20ac12%', 'numbers-as-text'],
    ['12% \u20ac', 'numbers-as-text'],
    ['\u22125%', 'numbers-as-text'],
    ['(12%)', 'numbers-as-text'],
    ['12.%%', 'numbers-as-text'],
    ['EUR 1,2%', 'numbers-as-text'],
  ])('is never hashed for being different: %s, and is flagged', (form, flag) => {
    const texts = many(50, (k) => form.replace('%', String(k + 10)));
    expect(personalColumn('c', texts, texts.map(() => 1), () => false)).toBeNull();
    const found = profile(texts);
    expect(found).toMatchObject({ kind: 'categorical', hashed: false, suggestedRole: 'not used' });
    expect(found.flags.map(({ code }) => code)).toContain(flag);
    expect(found.flags.find(({ code }) => code === flag)?.finding).toContain('bring it in again');
  }); // prettier-ignore

  it('is none of the numbers that people are known by', () => {
    for (const form of ['123-45-6%', 'SM-%', '+44 (0)20 7946 0%', '12-34-%', 'A%', '%/B', '1:2:%x'])
      expect(personalColumn('c', many(50, (k) => form.replace('%', String(k + 100))), many(50, () => '1').map(Number), () => false)?.kind, form).toBe('identifier');
    // A heading that says so is believed whatever the values look like.
    expect(personalColumn('phone', many(50, (k) => `(${k})`), many(50, () => '1').map(Number), () => false)?.kind).toBe('identifier');
  }); // prettier-ignore
});

describe('columns that identify people', () => {
  const found = (name: string, values: readonly string[]) => {
    const { codes: rows, texts } = column(values);
    const counts = new Uint32Array(texts.length);
    for (const code of rows) counts[code]++;
    return personalColumn(name, texts, counts, (text) => text === '')?.kind ?? null;
  };
  it('are found by their values or their heading', () => {
    expect(
      found(
        'contact',
        many(40, (k) => `someone${k}@saltmarsh.example`),
      ),
    ).toBe('email');
    expect(found('last_name', ['Marsh', 'Reed'])).toBe('name');
    expect(
      found(
        'application_id',
        many(40, (k) => `SM-${k}`),
      ),
    ).toBe('identifier');
    expect(found('passport', ['X1'])).toBe('identifier');
  });
  it('are not amounts, dates or categories', () => {
    expect(
      found(
        'income',
        many(400, (k) => (k * 13.37).toFixed(2)),
      ),
    ).toBeNull();
    expect(
      found(
        'applied_on',
        many(40, (k) => `2024-01-${String((k % 28) + 1).padStart(2, '0')}`),
      ),
    ).toBeNull();
    expect(
      found(
        'region',
        many(40, (k) => ['north', 'south'][k % 2]),
      ),
    ).toBeNull();
  });
  it('keep equal values equal under the key, and only under the key', () => {
    const key = Buffer.alloc(32, 7);
    expect(hashText(key, 'SM-1')).toBe(hashText(key, 'SM-1'));
    expect(hashText(key, 'SM-1')).not.toBe(hashText(Buffer.alloc(32, 8), 'SM-1'));
  });
});

describe('leakage and duplicates', () => {
  it('flags a column that was made after the outcome', () => {
    const outcome = Uint8Array.from({ length: 1000 }, (_, k) => (k % 10 === 0 ? 0 : 1));
    const collected = column(many(1000, (k) => (k % 10 === 0 ? String(100 + k) : '0')));
    const noise = column(many(1000, (k) => String((k * 7919) % 1000)));
    const reader = numberReader(choices);
    expect(suspectLeakage(collected, () => false, outcome, reader)?.code).toBe('possible-leakage');
    expect(suspectLeakage(noise, () => false, outcome, reader)).toBeNull();
  });

  it('counts records that stood before, in all columns only', () => {
    const rows = new DuplicateRows();
    const segment = (values: readonly string[]) => ({ codes: column(values).codes, texts: [...column(values).texts] });
    rows.add([segment(['1', '1', '2']), segment(['a', 'b', 'a'])], 3);
    rows.add([segment(['1', '2', '1']), segment(['a', 'b', 'a'])], 3);
    expect(rows.count()).toBe(2);
  });
});

describe('personal data in the values of a column', () => {
  it('is warned of wherever it stands, with its standard, and no value is listed', () => {
    const notes = many(3000, (k) => (k === 2900 ? 'asked ada@saltmarsh.example first' : ['paid late', 'moved', 'nothing'][k % 3]));
    const found = profile(notes, 'notes');
    expect(found).toMatchObject({ mostFrequent: [], valuesComplete: false, distinct: 4, hashed: false, suggestedRole: 'not used' });
    expect(found.flags).toContainEqual({
      code: 'holds-personal-data',
      weight: 'look',
      finding:
        'Seems to hold e-mail addresses in 1 row (RFC 5322, section 3.4.1). Its values are not listed; take it out of the file, make it an identifier, or do not use it, if that is so.',
    });
    expect(JSON.stringify(found)).not.toMatch(/saltmarsh\.example|moved/);
  });

  it('lists nothing of a column of cards, which are numbers too', () => {
    const cards = ['4111111111111111', '5500000000000004', '4012888888881881'];
    const found = profile(many(90, (k) => cards[k % 3]), 'paid_with');
    expect(found).toMatchObject({ kind: 'numeric', numeric: null, specialSuspects: [], mostFrequent: [] });
    expect(found.flags.map(({ code }) => code)).toEqual(['holds-personal-data']);
    expect(JSON.stringify(found)).not.toMatch(/\d{13}/);
    expect(JSON.stringify(profile(many(90, () => cards[0])))).not.toContain('4111');
  });

  it('leaves the amounts of a column with a stray address, and quotes none of its texts', () => {
    const found = profile(many(400, (k) => (k === 7 ? 'ask bob@saltmarsh.example' : String(900 + k))), 'income');
    expect(found).toMatchObject({ kind: 'numeric', numeric: { smallest: 900, largest: 1299 }, valuesComplete: false, suggestedRole: 'characteristic' });
    expect(found.flags.map(({ code }) => code).sort()).toEqual(['holds-personal-data', 'unreadable-numbers']);
    expect(JSON.stringify(found)).not.toContain('bob@');
  });
});
