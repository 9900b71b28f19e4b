import type { DateOrder, DateTimes } from '@tallystone/contracts/specification/types';
import { type DateReader, dateReader, longestDateTime, noSuchDate } from '../dates';
import { NotPlain } from './field-index';

/** Bytes of an ISO date. */
export const isoLength = 10;

/** Null where only ISO dates are dates. */
export function dateRewriter(
  order: DateOrder | undefined,
  missing: readonly string[],
  dateTimes?: DateTimes,
): DateRewriter | null {
  const read = dateReader(order, missing, dateTimes);
  return read && new DateRewriter(read, dateTimes === 'day' ? longestDateTime : isoLength);
}

/** Writes the ISO date of a field in the stated order: the careful reader's own rule, on bytes. */
export class DateRewriter {
  /** Holds the ISO date after `rewrite`, with a view on the whole of it. */
  readonly bytes = new Uint8Array(isoLength);
  readonly words = new DataView(this.bytes.buffer);

  /** @param longest bytes of the longest field that can be one */
  constructor(
    private readonly read: DateReader,
    private readonly longest: number,
  ) {}

  /**
   * @returns whether the field is such a date
   * @throws NotPlain for one that does not exist, which the careful reader names
   */
  rewrite(bytes: Uint8Array, start: number, end: number): boolean {
    const length = end - start;
    if (
      length < 8 ||
      length > this.longest ||
      !(isSign(bytes[start + 1]) || isSign(bytes[start + 2]) || isSign(bytes[start + 4]))
    )
      return false;
    let text = '';
    for (let at = start; at < end; at++) text += String.fromCharCode(bytes[at]);
    const iso = this.read(text);
    if (iso === noSuchDate) throw new NotPlain('a date that does not exist');
    if (iso === null) return false;
    for (let at = 0; at < isoLength; at++) this.bytes[at] = iso.charCodeAt(at);
    return true;
  }
}

/** A hyphen, a point or a slash, which follow one another in ASCII. */
const isSign = (byte: number): boolean => byte >= 45 && byte <= 47;
