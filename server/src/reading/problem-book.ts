import type { DateOrder, Encoding } from '@tallystone/contracts/specification/types';
import { orderWords } from './dates';
import { ENCODING_NAMES } from './encodings';
import type { Doubt, ReadingProblem, ReadingProblemCode } from './types';

const MOST_LINES = 20;
/** Problems of single cells are listed up to here, and counted beyond. */
const MOST_CELLS = 20;

interface Lines {
  lines: number[];
  count: number;
  detail: string;
  record: number;
}

/** Collects what is wrong with a file while it is read: one problem per kind for whole lines, one per cell otherwise. */
export class ProblemBook {
  any = false;
  /** The limit, once a row beyond it has come. */
  tooManyRows: number | null = null;
  rowsFound = 0;

  private readonly list: ReadingProblem[] = [];
  private readonly byLine = new Map<ReadingProblemCode, Lines>();
  private readonly cells = new Map<ReadingProblemCode, number>();
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
    this.cellFault('cell-too-large', `holds more than ${most.toLocaleString('en-GB')} characters`, {
      line,
      record,
      position,
      column,
    });
  }

  noSuchDate(line: number, record: number, position: number, column: string, order: DateOrder): void {
    this.cellFault('no-such-date', `is no date that exists, read ${orderWords[order]}`, { line, record, position, column });
  }

  nul(line: number, record: number, position: number, column: string | undefined): void {
    this.cellFault('nul-byte', 'contains a NUL byte', { line, record, position, column });
  }

  problems(): ReadingProblem[] {
    const problems = [...this.list];
    for (const [code, { lines, count, detail, record }] of this.byLine) {
      const where = { line: lines[0], lines, count, ...(record > 0 ? { record } : {}) };
      problems.push({ code, message: this.say(code, lines, count, detail), where });
    }
    for (const [code, count] of this.cells) {
      if (count > MOST_CELLS) {
        problems.push({ code, message: `The same is true of ${count - MOST_CELLS} more cells.`, where: { count } });
      }
    }
    if (this.tooManyRows !== null) {
      problems.push({
        code: 'too-many-rows',
        message: `The file has ${this.rowsFound.toLocaleString('en-GB')} rows; at most ${this.tooManyRows.toLocaleString('en-GB')} can be brought in.`,
        where: { count: this.rowsFound },
      });
    }
    return problems.sort((a, b) => (a.where.line ?? 0) - (b.where.line ?? 0));
  }

  private say(code: ReadingProblemCode, lines: number[], count: number, detail: string): string {
    const others = count > 1 ? ` ${count} lines in all: ${lines.join(', ')}${count > lines.length ? ', …' : ''}.` : '';
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

  private cellFault(
    code: ReadingProblemCode,
    what: string,
    place: { line: number; record: number; position: number; column: string | undefined },
  ): void {
    const count = (this.cells.get(code) ?? 0) + 1;
    this.cells.set(code, count);
    this.any = true;
    const { column, ...where } = place;
    const name = column === undefined ? `column ${place.position}` : `column ${place.position} ("${column}")`;
    this.onDoubt?.({ code, line: place.line, record: place.record, what: `${name} ${what}` });
    if (count > MOST_CELLS) return;
    this.add({
      code,
      message: `The cell in line ${place.line}, ${name}, ${what}.`,
      where: column === undefined ? where : { ...where, column },
    });
  }
}
