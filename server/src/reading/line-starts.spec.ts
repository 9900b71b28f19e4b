import { describe, expect, it } from 'vitest';
import { LineStarts } from './line-starts';

const encodings = ['utf-8', 'windows-1252', 'utf-16le', 'utf-16be'] as const;
const encoded = (text: string, encoding: (typeof encodings)[number]): Buffer => {
  if (!encoding.startsWith('utf-16')) return Buffer.from(text, encoding === 'utf-8' ? 'utf8' : 'latin1');
  const wide = Buffer.from(text, 'utf16le');
  return encoding === 'utf-16be' ? wide.swap16() : wide;
};

describe('where lines begin', () => {
  it.each(encodings)('is found in %s, however lines end and wherever the bytes are cut', (encoding) => {
    // In UTF-16 these hold the bytes of CR and LF without being either: \u0a0d is D and A of one unit, \u0d00\u0a41 a low and a high byte.
    const odd = encoding.startsWith('utf-16') ? '\u0a0d\u0d00\u0a41' : 'é';
    const lines = [`a${odd}b`, '', 'c', '', 'd', 'e', ''];
    const ends = ['\r\n', '\n', '\r', '\r\n', '\r', '\n'];
    const bytes = encoded(lines.map((line, place) => `${line}${ends[place] ?? ''}`).join(''), encoding);
    const expected = lines.map((_, place) => encoded(lines.slice(0, place).map((line, before) => line + ends[before]).join(''), encoding).length); // prettier-ignore
    for (let size = 1; size <= bytes.length; size++) {
      const found = new LineStarts(encoding, [1, 2, 3, 4, 5, 6, 7]);
      for (let from = 0; from < bytes.length; from += size) found.push(bytes.subarray(from, from + size));
      expect([size, ...[1, 2, 3, 4, 5, 6, 7].map((line) => found.startOf(line))]).toEqual([size, ...expected]);
    }
  });

  it('stops where no line is wanted any more, and gives the end for a line that has not come', () => {
    const found = new LineStarts('utf-8', [2]);
    expect(found.push(Buffer.from('a,b\r'))).toBe(true);
    expect(found.push(Buffer.from('\n1,2\n3,4\n'))).toBe(false);
    expect(found.startOf(2)).toBe(5);
    const short = new LineStarts('utf-8', [9]);
    expect(short.push(Buffer.from('a,b\n1,2\n'))).toBe(true);
    expect(short.startOf(9)).toBe(8);
    expect(new LineStarts('utf-8', []).push(Buffer.from('a'))).toBe(false);
  });
});
