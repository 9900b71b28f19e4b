/** Values in one field, parted by commas; one that holds a comma, a quote or outer blanks stands in quotes, as in a CSV file (RFC 4180). */

/**
 * @param plain what a value without quotes may begin with: anything up to the next comma
 * @example readListed('NA, "a, b", " "') // ['NA', 'a, b', ' ']
 * @returns the values without repetition; null where a quote is not closed, or something stands behind a closed one
 */
export function readListed(text: string, plain = /^[^,]*/): string[] | null {
  const values = new Set<string>();
  let rest = text;
  for (;;) {
    rest = rest.trimStart();
    const quoted = /^"((?:[^"]|"")*)"\s*(?=,|$)/.exec(rest);
    if (!quoted && rest.startsWith('"')) return null;
    const unquoted = plain.exec(rest)?.[0] ?? '';
    const value = quoted ? quoted[1].replaceAll('""', '"') : unquoted.trim();
    if (quoted || value !== '') values.add(value);
    rest = rest.slice((quoted?.[0] ?? unquoted).length);
    if (rest === '') return [...values];
    rest = rest.slice(1);
  }
}

/** The same values as `readListed` reads them. */
export const writeListed = (values: readonly (string | number)[]): string =>
  values
    .map((value) => {
      const text = String(value);
      return text === '' || text.trim() !== text || /[",]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
    })
    .join(', ');

/**
 * A number as people type it: a sign, digits, one decimal sign. Nothing else is guessed at: 1 000 and 1,234 could mean two numbers each, and
 * 0x10 and a date are none.
 *
 * @example readNumber('21,5') // 21.5
 * @returns null for what is no number or could be two
 */
export function readNumber(text: string): number | null {
  const typed = text.trim().replace('\u2212', '-');
  if (!/^[+-]?(\d+([.,]\d+)?|[.,]\d+)$/.test(typed) || /^[+-]?[1-9]\d{0,2},\d{3}$/.test(typed)) return null;
  return Number(typed.replace(',', '.'));
}
