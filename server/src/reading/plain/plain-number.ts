import { mostWhole } from './number-style';

/** The same as `spelled` of number-style.ts, over bytes; which decimals the number has, or -1 where it is no plain number. */
export const notPlainNumber = -1;

/** What `readPlain` read, as a whole number. A field of its own, because two results would be an object for each number. */
export const read = new Int32Array(1);

export function readPlain(bytes: Uint8Array, start: number, end: number, sign: number): number {
  const minus = bytes[start] === 45 && start < end ? 1 : 0;
  const begin = start + minus;
  const length = end - begin;
  if (length <= 0 || length > 10) return notPlainNumber;
  let whole = 0;
  let point = -1;
  for (let at = begin; at < end; at++) {
    const digit = bytes[at] - 48;
    if (digit >= 0 && digit <= 9) whole = (Math.imul(whole, 10) + digit) | 0;
    else if (digit === sign - 48 && point < 0 && at > begin) point = at;
    else return notPlainNumber;
  }
  const before = point < 0 ? length : point - begin;
  if (before === 10 || point === end - 1 || (before > 1 && bytes[begin] === 48)) return notPlainNumber;
  if (whole >= mostWhole || (minus === 1 && whole === 0)) return notPlainNumber;
  read[0] = minus === 1 ? -whole : whole;
  return point < 0 ? 0 : end - point - 1;
}

/**
 * Two hashes that stand for a plain number where whole rows are compared: different for different spellings, the same in every segment whatever
 * its style.
 */
export function numberHashOne(whole: number, decimals: number): number {
  const hash = Math.imul(whole, 0x9e37_79b1) + decimals;
  return hash ^ (hash >>> 15);
}
export function numberHashTwo(whole: number, decimals: number): number {
  const hash = Math.imul(whole ^ 0x5bd1_e995, 0x2545_f491) ^ decimals;
  return hash ^ (hash >>> 16);
}
