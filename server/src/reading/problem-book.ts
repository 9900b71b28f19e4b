import type { DateOrder, Encoding } from '@tallystone/contracts/specification/types';
import { orderWords } from './dates';
import { ENCODING_NAMES } from './encodings';
import { thin } from './thin';
import type { Doubt, ReadingProblem, ReadingProblemCode } from './types';

const MOST_LINES = 20;
/** Problems of single cells are listed up to here, and counted beyond. */
const MOST_CELLS = 20;
/** Columns that are named with their count of cells that are not listed. */
const MOST_COLUMNS = 5;

interface Lines {
  lines: number[];
  count: number;
  detail: string;
  record: number;
}

/** Faults of one kind in single cells. */
interface Cells {
  /** "are no dates that exist, …": what is true of several. */
  readonly several: string;
  count: number;
  /** Those beyond, by the name of their column. */
  readonly beyond: Map<string, number>;
}

/** Collects what is wrong with a file while it is read: one problem per kind for whole lines, one per cell otherwise. */
export class ProblemBook {
  any = false;
  /** The limit, once a row beyond it has come. */
  tooManyRows: number | null = null;
  rowsFound = 0;

  private readonly list: ReadingProblem[] = [];
  private readonly byLine = new Map<ReadingProblemCode, Lines>();
  private readonly cells = new Map<ReadingProblemCode, Cells>();
  private encoding: Encoding = 'utf-8';
  private lastNotInEncoding = 0;
  private lastLost = 0;

  constructor(private readonly onDoubt?: (doubt: Doubt) => void) {}

  add(problem: ReadingProblem): void {
    this.any = true;
    this.list.push(problem);
  }

  ragged(line: number, record: number, found: number, expected: number): void {
    const what = `${found} field${found === 1 ? '' : 's'} where the header has ${expected}`;
    this.lineFault('ragged', line, record, `Line ${line} has ${what}.`);
    this.onDoubt?.({ code: 'ragged', line, record, what });
  }

  strayQuote(line: number, record: number): void {
    this.lineFault('stray-quote', line, record, '');
    this.onDoubt?.({ code: 'stray-quote', line, record, what: 'text after a closing quote' });
  }

  notInEncoding(line: number, encoding: Encoding): void {
    this.encoding = encoding;
    if (this.lastNotInEncoding === line) return;
    this.lastNotInEncoding = line;
    this.lineFault('not-in-encoding', line, 0, '');
    this.onDoubt?.({ code: 'not-in-encoding', line, record: null, what: `not ${ENCODING_NAMES[encoding]}` });
  }

  /**
   * A sign that stands for a lost character (U+FFFD) is refused and not kept as a category: whoever wrote the file had text that is no longer in it, two
   * different texts may have become one, and only another export brings them back.
   */
  lostCharacters(line: number): void {
    if (this.lastLost === line) return;
    this.lastLost = line;
    this.lineFault('lost-characters', line, 0, '');
    this.onDoubt?.({ code: 'lost-characters', line, record: null, what: 'a character that was lost before (U+FFFD)' });
  }

  unclosedQuote(line: number, record: number): void {
    this.add({
      code: 'unclosed-quote',
      message: `A quote is opened on line ${line} and never closed.`,
      where: { line, record },
    });
    this.onDoubt?.({ code: 'unclosed-quote', line, record, what: 'a quote that is never closed' });
  }

  cellTooLarge(line: number, record: number, position: number, column: string | undefined, most: number): void {
    const what = `more than ${most.toLocaleString('en-GB')} characters`;
    this.cellFault('cell-too-large', `holds ${what}`, `hold ${what}`, { line, record, position, column });
  }

  noSuchDate(line: number, record: number, position: number, column: string, order: DateOrder): void {
    const read = `read ${orderWords[order]}`;
    const place = { line, record, position, column };
    this.cellFault('no-such-date', `is no date that exists, ${read}`, `are no dates that exist, ${read}`, place);
  }

  nul(line: number, record: number, position: number, column: string | undefined): void {
    this.cellFault('nul-byte', 'contains a NUL byte', 'contain a NUL byte', { line, record, position, column });
  }

  problems(): ReadingProblem[] {
    const problems = [...this.list];
    for (const [code, { lines, count, detail, record }] of this.byLine) {
      const where = { line: lines[0], lines, count, ...(record > 0 ? { record } : {}) };
      problems.push({ code, message: this.say(code, lines, count, detail), where });
    }
    problems.sort(byLine);
    for (const [code, cells] of this.cells) {
      if (cells.count <= MOST_CELLS) continue;
      // After those of its kind that are listed: before them nobody could tell what is true of so many more.
      const after = problems.findLastIndex((problem) => problem.code === code) + 1;
      problems.splice(after, 0, { code, message: moreCells(cells), where: { count: cells.count } });
    }
    if (this.tooManyRows !== null) {
      problems.unshift({
        code: 'too-many-rows',
        message: `The file has ${thin(this.rowsFound)} rows; at most ${thin(this.tooManyRows)} can be brought in.`,
        where: { count: this.rowsFound },
      });
    }
    return problems;
  }

  private say(code: ReadingProblemCode, lines: number[], count: number, detail: string): string {
    const others = count > 1 ? ` ${thin(count)} lines in all: ${lines.join(', ')}${count > lines.length ? ', …' : '.'}` : '';
    if (code === 'ragged') return `${detail}${others}`;
    if (code === 'stray-quote')
      return `Line ${lines[0]} has text after a closing quote; a quote inside a quoted field is doubled.${others}`;
    if (code === 'lost-characters')
      return `Line ${lines[0]} holds the sign for a character that was lost before the file came here (U+FFFD). Export the file again from where it comes from, in UTF-8 or in the encoding of its source.${others}`;
    const offer = this.encoding === 'utf-8' ? '; read as Windows-1252?' : '.';
    return `Line ${lines[0]} is not ${ENCODING_NAMES[this.encoding]}${offer}${others}`;
  }

  private lineFault(code: ReadingProblemCode, line: number, record: number, detail: string): void {
    this.any = true;
    const known = this.byLine.get(code);
    if (known === undefined) {
      this.byLine.set(code, { lines: [line], count: 1, detail, record });
    } else {
      known.count++;
      if (known.lines.length < MOST_LINES) known.lines.push(line);
    }
  }

  /** @param several the same of several cells */
  private cellFault(
    code: ReadingProblemCode,
    what: string,
    several: string,
    place: { line: number; record: number; position: number; column: string | undefined },
  ): void {
    const cells = this.cells.get(code) ?? { several, count: 0, beyond: new Map<string, number>() };
    cells.count++;
    this.cells.set(code, cells);
    this.any = true;
    const { column, ...where } = place;
    const name = column === undefined ? `column ${place.position}` : `column ${place.position} ("${column}")`;
    this.onDoubt?.({ code, line: place.line, record: place.record, what: `${name} ${what}` });
    if (cells.count > MOST_CELLS) {
      cells.beyond.set(name, (cells.beyond.get(name) ?? 0) + 1);
      return;
    }
    this.add({
      code,
      message: `The cell in line ${place.line}, ${name}, ${what}.`,
      where: column === undefined ? where : { ...where, column },
    });
  }
}

const byLine = (a: ReadingProblem, b: ReadingProblem): number => (a.where.line ?? 0) - (b.where.line ?? 0);

/** "1 678 more cells are no dates that exist, read with the day first: 1 000 in column 2 ("opened"), 678 in column 3 ("closed")." */
function moreCells({ several, count, beyond }: Cells): string {
  const rest = count - MOST_CELLS;
  const more = rest === 1 ? '1 more cell, as those above' : `${thin(rest)} more cells ${several}`;
  const columns = [...beyond].sort(([, a], [, b]) => b - a);
  const named = columns.slice(0, MOST_COLUMNS).map(([name, cells]) => `${thin(cells)} in ${name}`);
  const others = columns.length - named.length;
  return `${more}: ${named.join(', ')}${others > 0 ? ` and more in ${thin(others)} other columns` : ''}.`;
}
