import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import { columnRoles, singleRoles } from '@tallystone/contracts/samples/columns';
import type { DefinedColumn } from '@tallystone/contracts/samples/definition';
import { type DictionaryEntry, dictionaryHeadings } from '@tallystone/contracts/samples/dictionary';
import { CsvError, parse } from 'csv-parse/sync';
import { stringify } from 'csv-stringify/sync';

type Heading = (typeof dictionaryHeadings)[number];

/** Text that a spreadsheet would run as a formula, also behind blanks (OWASP, CSV Injection), or that an apostrophe of ours stands before. */
const formula = /^'*\s*[=+\-@]|^'*[\t\r]/;
const neutralised = (text: string): string => (formula.test(text) ? `'${text}` : text);
const asWritten = (text: string): string => (text.startsWith("'") && formula.test(text) ? text.slice(1) : text);

/** The dictionary as CSV (RFC 4180): a line for each column, and one more for each further special code. */
export function dictionaryCsv(columns: readonly DefinedColumn[], entries: readonly DictionaryEntry[]): string {
  const lines = columns.flatMap((column) => {
    const entry = entries.find((one) => one.column === column.column);
    const codes = column.special.flatMap(({ label, values }) => values.map((value) => ({ code: String(value), meaning: label })));
    return (codes.length > 0 ? codes : [{ code: '', meaning: '' }]).map(({ code, meaning }) =>
      [
        column.column,
        column.kind,
        column.role,
        entry?.label ?? '',
        entry?.unit ?? '',
        entry?.description ?? '',
        code,
        meaning,
        entry?.treatments.find((one) => one.code === code)?.treatment ?? '',
      ].map(neutralised),
    );
  });
  return stringify([[...dictionaryHeadings], ...lines], { record_delimiter: 'windows' });
}

/** What a file says of the columns that it names. */
export interface ReadDictionary {
  readonly columns: DefinedColumn[];
  readonly entries: DictionaryEntry[];
}

interface Line {
  readonly line: number;
  readonly fields: number;
  readonly cells: Partial<Record<Heading, string>>;
}

/**
 * Reads a dictionary file against the columns that there are. What the file has no heading for stays as it is; columns that it does not name stay
 * as they are. Every problem is named with its line and heading, and then nothing is taken.
 */
export function readDictionaryCsv(
  text: string,
  columns: readonly DefinedColumn[],
  entries: readonly DictionaryEntry[],
): { read: ReadDictionary | null; problems: ProblemItem[] } {
  const problems: ProblemItem[] = [];
  const say = (code: string, message: string, line: number, heading?: Heading): void =>
    void problems.push({ code, message: `Line ${line}: ${message}`, where: heading ? { line, column: heading } : { line } });
  text.split(/\r\n|\n|\r/).forEach((line, place) => {
    if (line.includes('\ufffd'))
      say(
        'lost-characters',
        'it holds the sign for a lost character (U+FFFD). Save the file again in UTF-8 from where it comes from.',
        place + 1,
      );
  });
  if (problems.length > 0) return { read: null, problems };
  const { headings, lines } = linesOf(text, say);
  const has = (heading: Heading): boolean => headings.includes(heading);
  if (problems.length === 0 && !has('column')) say('no-column-heading', 'there is no heading "column".', 1);
  // Under headings that are not known nothing can be said of what stands there.
  if (problems.length > 0) return { read: null, problems };
  for (const { line, fields } of lines)
    if (fields !== headings.length) say('field-count', `${fields} fields, where the header has ${headings.length}.`, line);

  const byColumn = new Map<string, Line[]>();
  for (const line of lines) {
    const name = line.cells.column ?? '';
    if (!columns.some(({ column }) => column === name))
      say('no-such-column', name === '' ? 'no column is named.' : `the sample has no column "${name}".`, line.line, 'column');
    else byColumn.set(name, [...(byColumn.get(name) ?? []), line]);
  }
  const nextColumns = columns.map((column) => {
    const own = byColumn.get(column.column);
    return own ? columnFrom(own, column, has, say) : column;
  });
  const nextEntries = columns.flatMap(({ column }) => {
    const before = entries.find((entry) => entry.column === column) ?? {
      column,
      label: '',
      unit: '',
      description: '',
      treatments: [],
    };
    const own = byColumn.get(column);
    const entry = own ? entryFrom(own, before, has, say) : before;
    return entry.label || entry.unit || entry.description || entry.treatments.length > 0 ? [entry] : [];
  });
  for (const role of singleRoles) {
    const holders = nextColumns.filter((column) => column.role === role);
    const named = holders.map(({ column }) => byColumn.get(column)?.[0].line ?? 0).filter((line) => line > 0);
    if (holders.length > 1 && named.length > 0)
      say('role-twice', `"${role}" can be one column alone, and would be ${holders.map(({ column }) => column).join(' and ')}.`, Math.max(...named), 'role');
  } // prettier-ignore
  problems.sort((a, b) => Number(a.where.line) - Number(b.where.line));
  return problems.length > 0 ? { read: null, problems } : { read: { columns: nextColumns, entries: nextEntries }, problems };
}

/** What parts fields: that under which the first line has the most headings; a comma, as an export has, where none has more. */
function delimiterOf(text: string): string {
  const [first] = text.replace(/^\ufeff/, '').split(/\r\n|\n|\r/, 1);
  const known = (delimiter: string): number => {
    const headings = first.split(delimiter).map((heading) =>
      heading
        .trim()
        .replace(/^"(.*)"$/, '$1')
        .trim()
        .toLowerCase(),
    );
    return headings.filter((heading) => (dictionaryHeadings as readonly string[]).includes(heading)).length;
  };
  return [',', ';', '\t'].reduce((best, delimiter) => (known(delimiter) > known(best) ? delimiter : best));
}

type Say = (code: string, message: string, line: number, heading?: Heading) => void;

function linesOf(text: string, say: Say): { headings: Heading[]; lines: Line[] } {
  let records: { info: { lines: number }; record: string[] }[];
  const delimiter = delimiterOf(text);
  try {
    records = parse(text, { bom: true, delimiter, info: true, relax_column_count: true, skip_empty_lines: true, trim: false }) as unknown as typeof records;
  } catch (error) {
    if (!(error instanceof CsvError)) throw error;
    say('not-csv', `this is no CSV (${error.message}).`, Number(error.lines ?? 1));
    return { headings: [], lines: [] };
  } // prettier-ignore
  const [first, ...rest] = records;
  const headings = (first?.record ?? []).map((heading) => heading.trim().toLowerCase());
  headings.forEach((heading, place) => {
    if (!(dictionaryHeadings as readonly string[]).includes(heading))
      say(
        'no-such-heading',
        `"${heading}" is no heading of a dictionary: ${dictionaryHeadings.join(', ')}, parted by commas, semicolons or tabs.`,
        1,
      );
    else if (headings.indexOf(heading) !== place) say('heading-twice', `the heading "${heading}" stands there twice.`, 1);
  });
  let before = first?.info.lines ?? 0;
  const lines = rest.map(({ info, record }): Line => {
    const line = before + 1;
    before = info.lines;
    return {
      line,
      fields: record.length,
      cells: Object.fromEntries(headings.map((heading, place) => [heading, asWritten(record[place] ?? '').trim()])),
    };
  });
  return { headings: headings as Heading[], lines };
}

/** What several lines of one column say must not differ: empty, or the same as on the first. */
function once(lines: readonly Line[], heading: Heading, say: Say): string {
  const value = lines[0].cells[heading] ?? '';
  for (const { line, cells } of lines.slice(1)) {
    const other = cells[heading] ?? '';
    if (other !== '' && other !== value)
      say('contradiction', `"${other}" contradicts "${value}" on line ${lines[0].line}.`, line, heading);
  }
  return value;
}

function columnFrom(lines: readonly Line[], column: DefinedColumn, has: (heading: Heading) => boolean, say: Say): DefinedColumn {
  const kind = once(lines, 'kind', say);
  if (kind !== '' && kind !== column.kind)
    say('other-kind', `${column.column} is ${column.kind} here; a dictionary does not change that.`, lines[0].line, 'kind');
  const written = once(lines, 'role', say);
  const role = columnRoles.find((one) => one === written);
  if (written !== '' && !role) say('no-such-role', `"${written}" is no role: ${columnRoles.join(', ')}.`, lines[0].line, 'role');
  const special = has('code') ? codesFrom(lines, column, say) : column.special;
  return { ...column, role: role ?? column.role, special };
}

/** As numbers are written in a dictionary, whatever the signs of the sample; a code that is none is kept as the text that it is. */
const plainNumber = /^-?\d+(\.\d+)?$/;

/** Codes of one meaning are one entry, as on the page. */
function codesFrom(lines: readonly Line[], { kind }: DefinedColumn, say: Say): DefinedColumn['special'] {
  const codes = new Map<string, (string | number)[]>();
  const seen = new Set<string>();
  for (const { line, cells } of lines) {
    const code = cells.code ?? '';
    const meaning = cells.meaning ?? '';
    if (code === '') {
      if (meaning !== '') say('no-code', `"${meaning}" is the meaning of no code.`, line, 'code');
      continue;
    }
    if (meaning === '') say('no-meaning', `say what ${code} means.`, line, 'meaning');
    else if (meaning.length > 200) say('too-long', 'a meaning has at most 200 characters.', line, 'meaning');
    if (kind === 'date') say('no-codes-here', 'a column of dates has no special codes.', line, 'code');
    if (seen.has(code)) say('code-twice', `the code ${code} stands there twice.`, line, 'code');
    seen.add(code);
    codes.set(meaning, [...(codes.get(meaning) ?? []), kind === 'numeric' && plainNumber.test(code) ? Number(code) : code]);
  }
  return [...codes].map(([label, values]) => ({ label, values }));
}

function entryFrom(lines: readonly Line[], before: DictionaryEntry, has: (heading: Heading) => boolean, say: Say): DictionaryEntry {
  const taken = (heading: 'label' | 'unit' | 'description'): string =>
    has(heading) ? once(lines, heading, say) : before[heading];
  const entry = {
    column: before.column,
    label: taken('label'),
    unit: taken('unit'),
    description: taken('description'),
    treatments: has('treatment')
      ? lines.flatMap(({ line, cells }) => {
          const { code = '', treatment = '' } = cells;
          if (treatment !== '' && code === '') say('no-code', `"${treatment}" treats no code.`, line, 'treatment');
          if (treatment.length > 200) say('too-long', 'a treatment has at most 200 characters.', line, 'treatment');
          return treatment === '' ? [] : [{ code, treatment }];
        })
      : before.treatments,
  };
  for (const [heading, most] of [['label', 120], ['unit', 40], ['description', 2000]] as const)
    if (entry[heading].length > most) say('too-long', `a ${heading} has at most ${most} characters.`, lines[0].line, heading);
  return entry;
} // prettier-ignore
