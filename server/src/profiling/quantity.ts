import { isNumberSomehow } from '../reading/index';

/**
 * Texts that say when or how much: dates and times in usual spellings, and amounts with signs that no number has. They may differ from row to row and yet
 * identify nobody, and what is wrong with them can be mended only as long as they are seen.
 */

const date = /(?:\d{4}([-/.])\d{1,2}\1\d{1,2}|\d{1,2}([-/.])\d{1,2}\2(?:\d{4}|\d{2}))/.source;
const time = /\d{1,2}:\d{2}(?::\d{2}(?:[.,]\d{1,9})?)?(?: ?[AaPp][Mm])?(?: ?(?:Z|[+-]\d{2}(?::?\d{2})?))?/.source;
const dateOrTime = new RegExp(`^(?:${date}(?:(?:T| +)${time})?|${time})$`);
const dateAndTime = new RegExp(`^${date}(?:T| +)${time}$`);

/** A calendar date, a time of day, or both. */
export const looksLikeTime = (text: string): boolean => text.length >= 4 && text.length <= 40 && dateOrTime.test(text);

/** A calendar date with a time of day. */
export const looksLikeDateTime = (text: string): boolean => text.length >= 10 && text.length <= 45 && dateAndTime.test(text);

/** A number with a currency sign or code, a percent sign, a typeset minus, or in the brackets of accountants. */
export function looksLikeAmount(text: string): boolean {
  if (text.length < 2 || text.length > 40) return false;
  const bracketed = text.startsWith('(') && text.endsWith(')');
  let bare = bracketed ? text.slice(1, -1).trim() : text;
  const signed = /^[\u2212\u2013]/.test(bare);
  bare = bare.replace(/^[+\-\u2212\u2013]\s?/, '');
  const number = bare
    .replace(/^(?:\p{Sc}|(?:EUR|USD|GBP|CHF|JPY)(?![A-Za-z]))\s?/u, '')
    .replace(/\s?(?:\p{Sc}|EUR|USD|GBP|CHF|JPY|%|\u2030)$/u, '');
  if (!bracketed && !signed && number === bare) return false;
  return isNumberSomehow(number);
}
