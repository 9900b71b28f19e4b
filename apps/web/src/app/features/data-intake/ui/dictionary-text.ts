/** The text of a file, or the first line that is not UTF-8 and how it would read as Windows-1252, or why it is no text at all. */
export type DictionaryText =
  | { readonly text: string }
  | { readonly line: number; readonly words: string; readonly asWindows1252: string }
  | { readonly refused: string };

/** What Windows-1252 has where Latin-1 has control signs, from 0x80 on; U+FFFD where it has nothing. Some decoders of that name are of Latin-1. */
const ownSigns = '€\ufffd‚ƒ„…†‡ˆ‰Š‹Œ\ufffdŽ\ufffd\ufffd‘’“”•–—˜™š›œ\ufffdžŸ';
const lineEnd = /\r\n|\n|\r/;

/** Null where the bytes are not of that encoding: no sign is ever put in place of one that is lost. */
function decoded(bytes: Uint8Array, encoding: string): string | null {
  try {
    return new TextDecoder(encoding, { fatal: true }).decode(bytes);
  } catch {
    return null;
  }
}

function fromWindows1252(bytes: Uint8Array): string {
  const signs = Array.from(bytes, (byte) => (byte >= 0x80 && byte < 0xa0 ? ownSigns[byte - 0x80] : String.fromCharCode(byte)));
  return signs.join('');
}

/**
 * Decodes a dictionary file: UTF-8, or UTF-16 where its byte-order mark says so. Anything else is not guessed: Windows-1252, which older spreadsheets
 * write, is for the person to say.
 */
export function dictionaryText(bytes: Uint8Array): DictionaryText {
  const [first, second] = bytes;
  const marked = first === 0xff && second === 0xfe ? 'utf-16le' : first === 0xfe && second === 0xff ? 'utf-16be' : null;
  if (marked !== null) {
    const text = decoded(bytes, marked);
    return text === null ? { refused: 'The file is not whole UTF-16, as its first two bytes say. Save it as UTF-8.' } : { text };
  }
  const text = decoded(bytes, 'utf-8');
  if (text !== null) return { text };
  const asWindows1252 = fromWindows1252(bytes);
  // Line ends are the same bytes in both; a line by itself is UTF-8 or is not.
  const lines = asWindows1252.split(lineEnd);
  let place = 0;
  let start = 0;
  for (let at = 0; at <= bytes.length; at++) {
    const ends = at === bytes.length || bytes[at] === 10 || (bytes[at] === 13 && bytes[at + 1] !== 10);
    if (!ends) continue;
    if (decoded(bytes.subarray(start, at), 'utf-8') === null) break;
    place++;
    start = at + 1;
  }
  const line = place + 1;
  const wrong = lines.findIndex((one) => one.includes('\ufffd'));
  if (wrong >= 0) return { refused: `Line ${wrong + 1} is neither UTF-8 nor Windows-1252. Save the file as CSV in UTF-8.` };
  return { line, words: lines[place], asWindows1252 };
}
