import { dictionaryText } from './dictionary-text';

const latin = (text: string): Uint8Array => Uint8Array.from(text, (sign) => sign.charCodeAt(0));

describe('the text of a dictionary file', () => {
  it('is UTF-8, with or without its mark, or the UTF-16 that its mark states', () => {
    const text = 'column,label\nage,Âge du client €\n';
    expect(dictionaryText(new TextEncoder().encode(text))).toEqual({ text });
    expect(dictionaryText(new TextEncoder().encode(`\ufeff${text}`))).toEqual({ text });
    const units = Uint8Array.from(`\ufeff${text}`, (sign) => sign.charCodeAt(0) & 0xff);
    const high = Uint8Array.from(`\ufeff${text}`, (sign) => sign.charCodeAt(0) >> 8);
    const little = Uint8Array.from({ length: units.length * 2 }, (_, at) => (at % 2 ? high : units)[at >> 1]);
    const big = Uint8Array.from({ length: units.length * 2 }, (_, at) => (at % 2 ? units : high)[at >> 1]);
    expect([dictionaryText(little), dictionaryText(big)]).toEqual([{ text }, { text }]);
    expect(dictionaryText(little.subarray(0, -1))).toHaveProperty('refused');
  });

  it.each(['\n', '\r\n', '\r'])(
    'is asked about where a line is not UTF-8, with that line as Windows-1252, lines ending with %j',
    (end) => {
      const bytes = latin(['column,label', 'home,Home', 'age,\xc2ge du client', 'x,\x80 \xe0 la demande', ''].join(end));
      expect(dictionaryText(bytes)).toEqual({
        line: 3,
        words: 'age,Âge du client',
        asWindows1252: ['column,label', 'home,Home', 'age,Âge du client', 'x,€ à la demande', ''].join(end),
      });
    },
  );

  it('is refused with the line where it is neither', () => {
    expect(dictionaryText(latin('column,label\nage,\xc2ge\nhome,\x81\n'))).toEqual({
      refused: 'Line 3 is neither UTF-8 nor Windows-1252. Save the file as CSV in UTF-8.',
    });
  });
});
