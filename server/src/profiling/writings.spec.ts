import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Writings, watchedColumns, writingsOfTexts } from './writings';

const distinct = (...segments: readonly (readonly string[])[]): number => {
  const writings = new Writings();
  for (const texts of segments) writings.add(writingsOfTexts(texts, (text) => text === '' || text === 'n/a'));
  return writings.distinct();
};

describe('identifiers without regard to how they are written', () => {
  it.each([
    ['case', ['AB12', 'ab12', 'aB12']],
    ['blanks and punctuation', ['AB-12', 'AB 12', ' ab/12.', 'AB12']],
    ['leading zeros, as a spreadsheet takes them away', ['00123', '123', '0123']],
    ['zeros after letters before the first number', ['AB0012', 'AB12', 'ab-012']],
    ['digits in groups', ['1234 5678', '12345678', '1234-5678']],
    ['other scripts and widths', ['ＡＢ１２', 'AB12', 'ab‑12']],
    ['accents written in two ways', ['Zo\u00eb1', 'zoe\u03081']],
  ])('are one: %s', (_, texts) => {
    expect(distinct(texts)).toBe(1);
    expect(distinct(...texts.map((text) => [text]))).toBe(1);
  });

  it.each([
    ['digits and letters that differ', ['AB12', 'AB13', 'AC12']],
    ['zeros within a number, after it and the last of all', ['102', '12', '120', '0', 'A0', 'A']],
    ['zeros after the first number', ['A1-01', 'A1-1']],
    ['an order that differs', ['12', '21']],
    ['accents', ['Zoe', 'Zo\u00eb']],
  ])('stay apart: %s', (_, texts) => expect(distinct(texts)).toBe(texts.length));

  it('tells numbers in parts by their parts where nearly all have some', () => {
    const parts = Array.from({ length: 400 }, (_, row) => `${Math.floor(row / 20) + 1}-${(row % 20) + 1}`);
    expect(distinct(parts)).toBe(400);
    // Written in both ways, parts are signs like others.
    const both = Array.from({ length: 50 }, (_, row) => `${100 + row}-${100 + row}`);
    expect(distinct([...both, ...both.slice(0, 10).map((text) => text.replace('-', ''))])).toBe(50);
  });

  it('does not count what stands for missing', () => expect(distinct(['', 'n/a', 'A1'], ['n/a', 'a1'])).toBe(1));

  it('takes no two of a million numbered applications for one', () => {
    const texts = Array.from({ length: 1_000_000 }, (_, row) => `SM-${String(2_000_000 + row)}`);
    expect(distinct([...texts, 'sm 2000001', 'SM2999999', 'SM-002000002'])).toBe(1_000_000);
  });

  it('never counts more than there are texts, and one again however it is decorated', () => {
    const sign = fc.constantFrom('', ' ', '-', '.', '/');
    const id = fc.tuple(fc.stringMatching(/^[A-Z]{1,3}$/), fc.integer({ min: 1, max: 99_999 }));
    fc.assert(
      fc.property(fc.uniqueArray(id, { selector: ([letters, number]) => `${letters}${number}`, maxLength: 40 }), sign, (ids, between) => {
        const plain = ids.map(([letters, number]) => `${letters}${number}`);
        const decorated = ids.map(([letters, number]) => `${letters.toLowerCase()}${between}00${number}${between}`);
        expect(distinct(plain)).toBe(plain.length);
        expect(distinct([...plain, ...decorated])).toBe(plain.length);
      }),
    );
  });
});

describe('the columns that are watched', () => {
  it('are the first eight of identifiers and addresses, not those of names', () => {
    const one = (kind: 'identifier' | 'email' | 'name') => ({ kind, finding: '' });
    expect(watchedColumns([null, one('identifier'), one('name'), one('email')])).toEqual([1, 3]);
    expect(watchedColumns(Array.from({ length: 20 }, () => one('identifier')))).toEqual([0, 1, 2, 3, 4, 5, 6, 7]);
  });
});
