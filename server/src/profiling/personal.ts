import { createHmac } from 'node:crypto';
import { looksLikeAmount, looksLikeTime } from './quantity';

/** What speaks for a column that identifies people, from its name and a first part of its values. */
export interface Personal {
  readonly kind: 'identifier' | 'email' | 'name';
  readonly finding: string;
}

const words = (name: string): string =>
  name
    .replace(/([a-z0-9])([A-Z])/g, '$1 $2')
    .replace(/[^\p{L}\p{N}]+/gu, ' ')
    .trim()
    .toLowerCase();

const emailAddress = /^[^@\s,;]{1,64}@[^@\s,;]+\.[\p{L}]{2,}$/u;
const personName =
  /\b(first|last|middle|sur|full|family|given|maiden|applicant|customer|borrower) ?names?\b|^names?$|\bsurname\b|\bforename\b/;
const nationalNumber =
  /\b(ssn|social security|national (id|insurance)|nino|passport|tax (id|number)|iban|driving licen[cs]e|phone|telephone|mobile|e ?mail)\b/;
const identifierName =
  /\b(id|ids|uuid|guid|ref|reference|identifier|key)$|\b(application|account|customer|loan|contract|case|record|row) (no|nr|number)\b/;

/** Whether a heading alone, or with values that all differ, can make a column one that identifies people. */
export function headingMayIdentify(name: string): boolean {
  const spoken = words(name);
  return personName.test(spoken) || nationalNumber.test(spoken) || identifierName.test(spoken);
}

/** Share of rows that must differ before values look like names of single applicants. */
const nearUnique = 0.95;
/** Fewer rows than this say nothing about uniqueness. */
const enoughRows = 30;
/** As many different values, shared by all, say something about applicants ("telephone": yes, no) and identify none of them. */
const sharedValues = 20;

/**
 * Whether a column identifies people: decided on the first segment, before anything of it is stored, so that what identifies is never kept
 * in the clear. `counts` are rows per distinct text.
 */
export function personalColumn(
  name: string,
  texts: readonly string[],
  counts: ArrayLike<number>,
  isMissing: (text: string) => boolean,
): Personal | null {
  let rows = 0;
  let distinct = 0;
  let emails = 0;
  let wholeNumbers = 0;
  let numbers = 0;
  texts.forEach((text, place) => {
    if (isMissing(text)) return;
    rows += counts[place];
    distinct++;
    if (emailAddress.test(text)) emails++;
    if (/^[+-]?\d+$/.test(text)) wholeNumbers++;
    if (/^[+-]?\d[\d.,\s'’]*([eE][+-]?\d+)?$/.test(text)) numbers++;
  });
  if (distinct === 0) return null;
  const spoken = words(name);
  if (emails * 2 > distinct)
    return { kind: 'email', finding: `${percent(emails / distinct)} of its values are e-mail addresses.` };
  const shared = rows >= enoughRows && distinct <= sharedValues;
  if (!shared && personName.test(spoken) && numbers === 0)
    return { kind: 'name', finding: 'Its heading says that it holds names of people.' };
  if (!shared && nationalNumber.test(spoken))
    return { kind: 'identifier', finding: 'Its heading says that it holds numbers or addresses of people.' };
  const unique = rows >= enoughRows && distinct >= nearUnique * rows;
  if (unique && identifierName.test(spoken))
    return { kind: 'identifier', finding: `Its heading says identifier, and ${percent(distinct / rows)} of the values differ.` };
  // What says when or how much differs, too, and identifies nobody: such a column stays in clear, and its profile says what it looks like.
  if (
    unique &&
    numbers === 0 &&
    texts.filter((text) => !isMissing(text) && (looksLikeTime(text) || looksLikeAmount(text))).length * 2 < distinct
  )
    return {
      kind: 'identifier',
      finding: `${percent(distinct / rows)} of its texts differ: each applicant has one of their own.`,
    };
  // Long whole numbers, all different, without a meaning of size.
  if (unique && distinct === rows && wholeNumbers === distinct && texts.every((text) => isMissing(text) || text.length >= 9)) {
    return { kind: 'identifier', finding: 'Long whole numbers, all of them different.' };
  }
  return null;
}

const percent = (share: number): string => `${(Math.floor(share * 1000) / 10).toFixed(share === 1 ? 0 : 1)} %`;

/**
 * A keyed hash in place of an identifying text: HMAC-SHA-256 (RFC 2104), 128 bits in base64url. Equal texts stay equal within the
 * installation, and nobody without the key can try texts against it.
 */
export const hashText = (key: Buffer, text: string): string =>
  createHmac('sha256', key).update(text, 'utf8').digest().subarray(0, 16).toString('base64url');
