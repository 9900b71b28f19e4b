import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import type { Preview, PreviewRequest, ReadingChoices } from '@tallystone/contracts/samples/reading';
import { type CsvError, parse } from 'csv-parse/sync';
import type { Context } from '../../context';
import { dateReader, isDateTime, orderWords } from '../../reading/dates';
import { decoderOf, wholeLines } from '../../reading/encodings';
import { numberReader, readSegments, sniff } from '../../reading/index';
import { readChunks } from '../../storage/rawFiles';
import {
  type DateEvidence,
  type NotDates,
  columnsNotDates,
  dateEvidence,
  dateQuestion,
  dateReason,
  decidedOrder,
} from './date-evidence';
import { DoubtfulLines } from './doubtful-lines';
import { doubtfulLinesIn } from './doubtful-places';
import type { FoundSample } from './find-sample';
import { problemItem } from './problem-item';
import { type Counted, judgeKind, thin } from '../../profiling/kind';

/** How much of a file is looked at before a person decides: its first chunk, and of that at most this many bytes. */
const lookedBytes = 2 * 1024 * 1024;
/** Of that, bytes from which rows are shown and the kinds of columns judged. */
const shownBytes = 1024 * 1024;
const shownRows = 20;
/** Rows from which the kinds of columns are judged. */
const judgedRows = 2000;

/** Texts that often mean "missing", proposed when they stand in the file. */
const missingTokens = ['NA', 'N/A', 'n/a', '#N/A', 'NULL', 'null', 'NaN', 'nan', '.', '?', '-'];

const signNames: Record<string, string> = {
  ',': 'comma',
  ';': 'semicolon',
  '\t': 'tab',
  '|': 'vertical bar',
  '.': 'point',
  ' ': 'blank',
  '\u00a0': 'no-break blank',
  '\u202f': 'narrow blank',
  "'": 'apostrophe',
};

/**
 * The first rows as they would be read, with every doubt about the part that was looked at. What is not chosen is judged from the file and
 * the reason is told; nothing is decided.
 */
export async function previewReading(context: Context, sample: FoundSample, chosen: PreviewRequest): Promise<Preview> {
  let bytes = Buffer.alloc(0);
  for await (const chunk of readChunks(context.sequelize, context.config.keys.rawFiles.subarray(0, 32), sample.rawFileId)) {
    bytes = Buffer.concat([bytes, chunk]);
    if (bytes.length >= lookedBytes) break;
  }
  const whole = sample.size <= lookedBytes;
  return previewOf(whole ? bytes : bytes.subarray(0, lookedBytes), whole, chosen);
}

/** @param whole the bytes are the whole file */
export async function previewOf(bytes: Buffer, whole: boolean, chosen: PreviewRequest): Promise<Preview> {
  const guessed = sniff(bytes.subarray(0, 65_536));
  const partial: Omit<ReadingChoices, 'missing'> = {
    delimiter: chosen.delimiter ?? (guessed.delimiter as ReadingChoices['delimiter']),
    encoding: chosen.encoding ?? guessed.encoding,
    decimal: chosen.decimal ?? guessed.decimal,
    thousands: chosen.thousands === undefined ? (guessed.thousands as ReadingChoices['thousands']) : chosen.thousands,
    trim: chosen.trim ?? true,
  };
  const table = looseTable(textOf(bytes, partial.encoding), partial);
  const missing = chosen.missing ?? proposeMissing(table.rows);
  const evidence = dateEvidence(table.header, table.rows, missing);
  const dateOrder = chosen.dateOrder ?? decidedOrder(evidence);
  const timed = columnsWithTimes(table, missing);
  const dateTimes = chosen.dateTimes ?? (timed.length > 0 ? 'day' : undefined);
  const dated: ReadingChoices = { ...partial, missing, ...(dateOrder && { dateOrder }), ...(dateTimes && { dateTimes }) };
  const apart = chosen.notDates ? [] : columnsNotDates(table.header, table.rows, dated);
  const notDates = chosen.notDates ?? apart.map(({ column }) => column);
  const choices: ReadingChoices = { ...dated, ...(notDates.length > 0 && { notDates }) };
  const { problems, records, doubtful } = await problemsOf(bytes, whole, choices);
  const rows = withDates(table, choices);
  const columns = table.header.map((column, position) => judgeColumn(column, position, rows, choices));
  return {
    choices,
    reasons: reasonsFor(chosen, choices, guessed.encodingStated, table, evidence),
    header: table.header,
    rows: rows.slice(0, shownRows),
    columns: columns.map(({ column, kind, against }) => ({ column, kind, against })),
    doubtful,
    looked: { records, bytes: bytes.length, whole },
    // Nothing is guessed in silence: without an answer the file waits.
    problems: dateOrder === undefined ? [dateQuestion(evidence), ...problems] : problems,
    warnings: [
      ...(dateTimes === 'day'
        ? timed.map((one) => timesWarning(one, dateReader(dateOrder, missing, dateTimes)?.(one.example)))
        : []),
      ...apart.map((one) => notDatesWarning(one, choices)),
      ...columns.flatMap(({ column, warning }) => (warning && !notDates.includes(column) ? [warning] : [])),
    ],
  };
}

interface Timed {
  readonly column: string;
  readonly position: number;
  readonly example: string;
}

/** A column counts as one of dates with a time when this share of its values are, as elsewhere. */
const mostlyTimes = 0.95;

function columnsWithTimes({ header, rows }: Table, missing: readonly string[]): Timed[] {
  const skipped = new Set(['', ...missing]);
  return header.flatMap((column, position) => {
    const texts = rows.map(({ cells }) => cells[position] ?? '').filter((text) => !skipped.has(text));
    const times = texts.filter(isDateTime);
    return times.length > 0 && times.length >= mostlyTimes * texts.length ? [{ column, position, example: times[0] }] : [];
  });
}

/** The time of day is left out while the file is read: whoever confirms the choices has seen that. */
const timesWarning = ({ column, position, example }: Timed, day: unknown): ProblemItem => ({
  code: 'date-times',
  message: `${column}: ${example} is read as its day${typeof day === 'string' ? `, ${day}` : ''}. The time of day is left out, and the day is that of the zone in which it is written.`,
  where: { column, position: position + 1 },
});

/** Said of each column: what it is taken for, and what can be done where that is not what was meant. */
const notDatesWarning = (
  { column, position, example: { text, line }, otherOrder }: NotDates,
  { dateOrder }: ReadingChoices,
): ProblemItem => ({
  code: 'not-dates',
  message: otherOrder
    ? `${column}: ${text} in line ${line} is no day ${orderWords[dateOrder ?? 'year-month-day']}: its dates have the other order, and it stays text. To have the dates of both, write them as YYYY-MM-DD in the file and bring it in again.`
    : `${column}: ${text} in line ${line} is no day in any order: the column has the form of dates and holds none, and stays text.`,
  where: { column, position: position + 1 },
});

interface Table {
  header: string[];
  rows: { record: number; line: number; cells: string[] }[];
}

/** The rows as they would be read: dates in the stated order as ISO dates. One that does not exist stays, for its problem to name. */
function withDates({ header, rows }: Table, { dateOrder, dateTimes, missing, notDates = [] }: ReadingChoices): Table['rows'] {
  const read = dateReader(dateOrder, missing, dateTimes);
  if (read === null) return rows;
  const kept = header.map((column) => notDates.includes(column));
  const cell = (text: string, position: number): string => {
    if (kept[position]) return text;
    const iso = read(text);
    return typeof iso === 'string' ? iso : text;
  };
  return rows.map((row) => ({ ...row, cells: row.cells.map(cell) }));
}

/** By csv-parse, which reads on where a file is not well formed: what is shown while something is still wrong with it. */
function looseTable(text: string, choices: Omit<ReadingChoices, 'missing'>): Table {
  let lines = 0;
  const read: { line: number; cells: string[] }[] = [];
  try {
    const records = parse(text, {
      delimiter: choices.delimiter,
      trim: choices.trim,
      bom: true,
      relax_column_count: true,
      relax_quotes: true,
      skip_empty_lines: true,
      skip_records_with_error: true,
      info: true,
      to: judgedRows + 1,
    }) as unknown as { info: { lines: number }; record: string[] }[];
    for (const { info, record } of records) {
      read.push({ line: lines + 1, cells: record });
      lines = info.lines;
    }
  } catch (error) {
    // An unclosed quote swallows the rest: what came before it is shown, the problem itself comes from the reader.
    if (!isCsvError(error)) throw error;
  }
  const [header, ...rows] = read;
  return { header: header?.cells ?? [], rows: rows.map(({ line, cells }, place) => ({ record: place + 1, line, cells })) };
}

const isCsvError = (error: unknown): error is CsvError =>
  error instanceof Error && 'code' in error && String(error.code).startsWith('CSV_');

/** For showing only: what is read is decoded strictly by the reader. Cut after a whole line, so that no cell is judged by what is left of it. */
function textOf(bytes: Buffer, encoding: ReadingChoices['encoding']): string {
  const first = bytes.subarray(0, shownBytes);
  const part = first.length < bytes.length ? first.subarray(0, wholeLines(first, encoding)) : first;
  // TextDecoder of some releases of Node.js takes Windows-1252 for Latin-1.
  if (encoding === 'windows-1252') return decoderOf(encoding).decode(part, 1, () => undefined);
  return new TextDecoder(encoding).decode(part);
}

async function problemsOf(
  bytes: Buffer,
  whole: boolean,
  choices: ReadingChoices,
): Promise<Pick<Preview, 'problems' | 'doubtful'> & { records: number }> {
  // Part of a file is cut after its last complete line, so that the cut itself is no problem.
  const end = whole ? bytes.length : wholeLines(bytes, choices.encoding);
  async function* once(): AsyncGenerator<Buffer> {
    yield bytes.subarray(0, end);
  }
  const doubtful = new DoubtfulLines(whole);
  const { onDoubt, onRecord } = doubtful;
  const file = readSegments(once(), choices, { onDoubt, onRecord });
  for await (const segment of file.segments) void segment;
  const facts = file.facts();
  // A quoted line break at the cut looks like a quote that is never closed, and a first line that goes on beyond it like the only one.
  const problems = facts.problems.filter(({ code }) => whole || !(code === 'unclosed-quote' || code === 'no-rows'));
  return {
    problems: problems.map(problemItem),
    records: facts.rows,
    doubtful: doubtfulLinesIn(bytes.subarray(0, end), choices.encoding, doubtful),
  };
}

function proposeMissing(rows: Table['rows']): string[] {
  const found = new Set<string>();
  for (const { cells } of rows) for (const cell of cells) if (missingTokens.includes(cell)) found.add(cell);
  return ['', ...missingTokens.filter((token) => found.has(token))];
}

function judgeColumn(column: string, position: number, rows: Table['rows'], choices: ReadingChoices) {
  const counts = new Map<string, number>();
  for (const { cells } of rows) {
    const cell = cells[position];
    if (cell !== undefined && !choices.missing.includes(cell)) counts.set(cell, (counts.get(cell) ?? 0) + 1);
  }
  const values: Counted[] = [...counts].map(([text, count]) => ({ text, count }));
  const { kind, against, flags } = judgeKind(values, numberReader(choices));
  const where = { column, position: position + 1 };
  let warning: ProblemItem | null = null;
  if (against !== null) warning = { code: 'doubtful-column', message: `${column}: ${against}`, where };
  else {
    const question = flags.find(({ code }) => code === 'ambiguous-numbers');
    if (question) warning = { code: question.code, message: `${column}: ${question.finding}`, where };
  }
  return { column, kind, against, warning };
}

function reasonsFor(
  chosen: PreviewRequest,
  choices: ReadingChoices,
  encodingStated: boolean,
  table: Table,
  evidence: DateEvidence,
): Preview['reasons'] {
  const width = table.header.length;
  const alike = table.rows.filter(({ cells }) => cells.length === width).length;
  const all: Preview['reasons'] = [
    {
      choice: 'delimiter',
      reason: `With the ${signNames[choices.delimiter]}, ${thin(alike)} of the first ${thin(table.rows.length)} rows have the header’s ${width} fields.`,
    },
    {
      choice: 'encoding',
      reason: encodingStated
        ? 'The file says so itself, by a byte-order mark.'
        : choices.encoding === 'utf-8'
          ? 'Its first bytes are UTF-8.'
          : choices.encoding === 'windows-1252'
            ? 'Its first bytes are not UTF-8; Windows-1252 is what such files mostly are.'
            : 'Its first bytes are those of UTF-16.',
    },
    {
      choice: 'decimal',
      reason:
        choices.decimal === ','
          ? 'Most columns of numbers with decimals use the comma.'
          : 'No column of numbers needs a decimal comma.',
    },
    {
      choice: 'thousands',
      reason:
        choices.thousands === null
          ? 'No column needs a thousands sign.'
          : `Numbers are written with the ${signNames[choices.thousands]} between thousands.`,
    },
    { choice: 'trim', reason: 'Blanks around a field that is not quoted carry no meaning.' },
    {
      choice: 'missing',
      reason:
        choices.missing.length > 1
          ? `Beside the empty field, ${choices.missing.filter((token) => token !== '').join(', ')} stand in the rows looked at.`
          : 'Only empty fields; no other usual token stands in the rows looked at.',
    },
    { choice: 'dateOrder', reason: dateReason(evidence) },
    ...(choices.dateTimes === 'day'
      ? [
          {
            choice: 'dateTimes' as const,
            reason:
              'A column holds dates with a time, or dates with the year first that are not written YYYY-MM-DD: each is read as its day.',
          },
        ]
      : []),
  ];
  return all.filter(({ choice }) => choice === 'dateOrder' || chosen[choice] === undefined);
}
