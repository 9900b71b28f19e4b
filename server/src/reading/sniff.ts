import { isUtf8 } from 'node:buffer';
import { mostCellCharacters } from '@tallystone/contracts/samples/reading';
import type { Encoding } from '@tallystone/contracts/specification/types';
import { byteOrderMark, decoderOf, signatureProblem } from './encodings';
import { headerProblems } from './header';
import { judgeFormat } from './numbers';
import { ProblemBook } from './problem-book';
import { Scanner } from './scanner';
import type { ReadingProblem } from './types';

export interface Sniffed {
  encoding: Encoding;
  /** The file says so itself by a byte-order mark. */
  encodingStated: boolean;
  delimiter: string;
  decimal: '.' | ',';
  thousands: string | null;
  header: string[];
  /** The first records, for a preview. */
  preview: string[][];
  problems: ReadingProblem[];
}

const DELIMITERS = [',', ';', '\t', '|'] as const;

/**
 * Guesses how a file is written from its first bytes (64 KiB are plenty). A guess to be confirmed by a person: the number format in
 * particular is judged from the whole of each column later (`judgeFormat`).
 *
 * @example
 * sniff(Buffer.from('age;income\n41;1.250,50\n')) // delimiter ';', decimal ',', thousands '.'
 */
export function sniff(firstBytes: Buffer): Sniffed {
  const problem = signatureProblem(firstBytes);
  const empty = {
    encoding: 'utf-8' as const,
    encodingStated: false,
    delimiter: ',',
    decimal: '.' as const,
    thousands: null,
    header: [],
    preview: [],
  };
  if (problem !== null) return { ...empty, problems: [problem] };
  if (firstBytes.length === 0)
    return { ...empty, problems: [{ code: 'no-rows', message: 'No rows: the file is empty.', where: {} }] };

  const mark = byteOrderMark(firstBytes);
  const encoding = mark?.encoding ?? guessEncoding(firstBytes);
  const book = new ProblemBook();
  const bytes = firstBytes.subarray(mark?.length ?? 0);
  if (mark === null && encoding === 'windows-1252')
    decoderOf('utf-8').decode(bytes, 1, (line) => book.notInEncoding(line, 'utf-8'));
  const text = decoderOf(encoding).decode(Buffer.from(bytes), 1, (line) => book.notInEncoding(line, encoding));

  const tables = DELIMITERS.map((delimiter) => ({ delimiter, records: firstRecords(text, delimiter) }));
  const best = tables.reduce((a, b) => (fitness(b.records) > fitness(a.records) ? b : a));
  const [header = [], ...preview] = best.records;
  const { decimal, thousands } = numberFormat(preview);
  const problems = [...book.problems(), ...headerProblems(header, 1)];
  return {
    encoding,
    encodingStated: mark !== null,
    delimiter: best.delimiter,
    decimal,
    thousands,
    header,
    preview: preview.slice(0, 20),
    problems,
  };
}

function guessEncoding(bytes: Buffer): Encoding {
  const sample = bytes.subarray(0, 4096);
  let even = 0;
  let odd = 0;
  sample.forEach((byte, index) => {
    if (byte !== 0) return;
    if (index % 2 === 0) even++;
    else odd++;
  });
  // ASCII characters in UTF-16 have a zero in every second byte.
  if (odd > sample.length / 5 && even === 0) return 'utf-16le';
  if (even > sample.length / 5 && odd === 0) return 'utf-16be';
  for (let cut = 0; cut < 4; cut++) if (isUtf8(bytes.subarray(0, bytes.length - cut))) return 'utf-8';
  return 'windows-1252';
}

function firstRecords(text: string, delimiter: string): string[][] {
  const records: string[][] = [];
  const ignore = (): void => undefined;
  const scanner = new Scanner(delimiter, true, mostCellCharacters, {
    record: (fields, _line, blank) => {
      if (!blank && records.length < 500) records.push([...fields]);
    },
    strayQuote: ignore,
    cellTooLarge: ignore,
    nul: ignore,
    unclosedQuote: ignore,
  });
  scanner.push(text);
  // The last record may have been cut: it counts only where it is the only one.
  if (records.length === 0) scanner.end();
  return records;
}

/** Share of records with as many fields as the header, then the number of fields: one field is no evidence at all. */
function fitness(records: string[][]): number {
  const width = records[0]?.length ?? 0;
  if (width < 2) return 0;
  const alike = records.filter((record) => record.length === width).length / records.length;
  return alike * 1000 + Math.min(width, 900) / 1000;
}

function numberFormat(records: string[][]): { decimal: '.' | ','; thousands: string | null } {
  const votes = new Map<string, { decimal: '.' | ','; thousands: string | null; columns: number }>();
  const width = records[0]?.length ?? 0;
  for (let index = 0; index < width; index++) {
    const texts = [...new Set(records.map((record) => record[index] ?? '').filter((text) => text !== ''))];
    const judged = judgeFormat(texts);
    const plain = texts.every((text) => /^[+-]?\d*$/.test(text));
    if (plain || judged.numbers < texts.length * 0.8 || judged.ambiguous !== null) continue;
    const key = JSON.stringify(judged.format);
    const vote = votes.get(key) ?? { ...judged.format, columns: 0 };
    vote.columns++;
    votes.set(key, vote);
  }
  const all = [...votes.values()];
  const commas = all.filter((vote) => vote.decimal === ',').reduce((sum, vote) => sum + vote.columns, 0);
  const points = all.reduce((sum, vote) => sum + vote.columns, 0) - commas;
  const decimal = commas > points ? ',' : '.';
  const thousands = all
    .filter((vote) => vote.decimal === decimal && vote.thousands !== null)
    .sort((a, b) => b.columns - a.columns)[0];
  return { decimal, thousands: thousands?.thousands ?? null };
}
