/** Text as RFC 4180 asks: CRLF between records, fields quoted where they must be. */

export type CsvCell = string | number | boolean | null | undefined;

/**
 * A text that a spreadsheet would read as a formula (it starts with = + - @ TAB CR, or blanks and then one of these) gets a leading
 * apostrophe (OWASP, CSV Injection). Numbers are never touched.
 */
export function neutralised(text: string): string {
  return /^\s*[=+\-@]|^[\t\r]/.test(text) ? `'${text}` : text;
}

function field(cell: CsvCell): string {
  if (cell === null || cell === undefined) return '';
  if (typeof cell === 'number') return Number.isNaN(cell) ? '' : String(cell);
  const text = neutralised(String(cell));
  return /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
}

/** @example csv(['bin', 'WOE'], [['0 to 8', 1.1134526]]) // 'bin,WOE\r\n0 to 8,1.1134526\r\n' */
export function csv(header: readonly string[], rows: Iterable<readonly CsvCell[]>): string {
  const lines = [header.map(field).join(',')];
  for (const row of rows) lines.push(row.map(field).join(','));
  return `${lines.join('\r\n')}\r\n`;
}
