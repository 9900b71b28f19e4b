import { type CodedColumn, leastNumber } from '../reading/plain/column-coder';
import { spell, spelled, wholeOf } from '../reading/plain/number-style';
import { textsOfCoded } from '../storage/packedSegment';
import { type Personal, headingMayIdentify, personalColumn } from './personal';

/** `personalColumn` for a coded segment: the same judgement, without making texts of the numbers of a column that they rule out. */
export function personalInSegment(name: string, column: CodedColumn, missing: ReadonlySet<string>): Personal | null {
  if (isOfAmounts(name, column, missing)) return null;
  const { codes, texts } = textsOfCoded(column);
  const counts = new Uint32Array(texts.length);
  for (const code of codes) counts[code]++;
  return personalColumn(name, texts, counts, (text) => missing.has(text));
}

/**
 * A heading that says nothing, no text with an @ in it, and one number, not missing, that is short (fewer than nine characters) or has decimals:
 * then no rule of `personalColumn` applies, since one asks for addresses, two for a heading, one for no number at all, and one for long whole
 * numbers throughout.
 */
function isOfAmounts(name: string, { rows, cells, style, texts }: CodedColumn, missing: ReadonlySet<string>): boolean {
  if (style === null || headingMayIdentify(name)) return false;
  const end = texts.size === 0 ? 0 : texts.places[texts.size];
  if (texts.bytes.subarray(0, end).includes(64)) return false;
  const missingNumbers = new Set<number>();
  for (const token of missing) {
    const number = spelled(token, style.sign);
    if (number !== null) missingNumbers.add(wholeOf(number, style));
  }
  for (let row = 0; row < rows; row++) {
    const cell = cells[row];
    if (cell < leastNumber || missingNumbers.has(cell)) continue;
    const text = spell(cell, style);
    if (text.length < 9 || !/^-?\d+$/.test(text)) return true;
  }
  return false;
}
