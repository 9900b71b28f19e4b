/**
 * Splits decoded text into records and fields after RFC 4180 (a quote inside an unquoted field stands for itself), keeping its state
 * between chunks, so that memory is bounded by one record whatever the file's size. Unlike a general parser it never stops at the
 * first fault and knows the line of each: csv-parse, which is several times slower here, is the oracle it is tested against.
 */

export interface RecordSink {
  /** `fields` is reused for the next record: copy what must stay. `blank` = an empty line. */
  record(fields: string[], line: number, blank: boolean): void;
  strayQuote(line: number): void;
  /** `field` counts from 0 within its record. */
  cellTooLarge(line: number, field: number): void;
  nul(line: number, field: number): void;
  unclosedQuote(openingLine: number): void;
}

const QUOTE = 34;
const LF = 10;
const CR = 13;
const TAB = 9;
const BLANK = 32;

const enum At {
  Start,
  Unquoted,
  Quoted,
  QuoteInQuoted,
  AfterQuoted,
}

export class Scanner {
  /** Physical line that is being read, from 1. */
  line = 1;

  private at = At.Start;
  private readonly fields: string[] = [];
  /** What earlier pieces gave of the field being read. */
  private part = '';
  private quoted = false;
  private anyQuoted = false;
  private strayed = false;
  private tooLarge = false;
  private recordLine = 1;
  private fieldLine = 1;
  private skipLineFeed = false;
  private nulSeen = false;
  private readonly delimiter: number;

  constructor(
    delimiter: string,
    private readonly trim: boolean,
    private readonly mostCharacters: number,
    private readonly sink: RecordSink,
  ) {
    this.delimiter = delimiter.charCodeAt(0);
  }

  push(text: string): void {
    if (text.length === 0) return;
    if (!this.nulSeen && text.includes('\0')) this.nulSeen = true;
    let i = 0;
    if (this.skipLineFeed) {
      if (text.charCodeAt(0) === LF) {
        if (this.at === At.Quoted) this.append('\n');
        i = 1;
      }
      this.skipLineFeed = false;
    }
    while (i < text.length) {
      switch (this.at) {
        case At.Start:
          i = this.start(text, i);
          break;
        case At.Unquoted:
          i = this.unquotedField(text, i);
          break;
        case At.Quoted:
          i = this.quotedField(text, i);
          break;
        case At.QuoteInQuoted:
          if (text.charCodeAt(i) === QUOTE) {
            this.append('"');
            this.at = At.Quoted;
            i++;
          } else {
            this.at = At.AfterQuoted;
          }
          break;
        case At.AfterQuoted:
          i = this.afterQuoted(text, i);
          break;
      }
    }
  }

  end(): void {
    if (this.at === At.Quoted) {
      this.sink.unclosedQuote(this.fieldLine);
      return;
    }
    if (this.at !== At.Start || this.fields.length > 0) {
      this.endField();
      this.endRecord();
    }
  }

  private isBlank(code: number): boolean {
    return (code === BLANK || code === TAB) && code !== this.delimiter;
  }

  private start(text: string, from: number): number {
    let i = from;
    if (this.trim) while (i < text.length && this.isBlank(text.charCodeAt(i))) i++;
    if (i === text.length) return i;
    this.fieldLine = this.line;
    if (text.charCodeAt(i) === QUOTE) {
      this.at = At.Quoted;
      this.quoted = true;
      this.anyQuoted = true;
      return i + 1;
    }
    this.at = At.Unquoted;
    return i;
  }

  private unquotedField(text: string, from: number): number {
    const { delimiter } = this;
    for (let i = from; i < text.length; i++) {
      const code = text.charCodeAt(i);
      if (code === delimiter || code === LF || code === CR) {
        if (this.part === '' && !this.nulSeen && i - from <= this.mostCharacters) {
          this.fields.push(this.trim ? trimEnd(text, from, i, delimiter) : text.slice(from, i));
          this.at = At.Start;
        } else {
          this.append(text.slice(from, i));
          this.endField();
        }
        return this.afterField(text, i, code);
      }
    }
    this.append(text.slice(from));
    return text.length;
  }

  private quotedField(text: string, from: number): number {
    const close = text.indexOf('"', from);
    const to = close === -1 ? text.length : close;
    if (to > from) {
      const piece = text.slice(from, to);
      this.append(piece);
      this.countLines(piece, to === text.length);
    }
    if (close === -1) return to;
    this.at = At.QuoteInQuoted;
    return close + 1;
  }

  private afterQuoted(text: string, from: number): number {
    let i = from;
    if (this.trim) while (i < text.length && this.isBlank(text.charCodeAt(i))) i++;
    if (i === text.length) return i;
    const code = text.charCodeAt(i);
    if (code === this.delimiter || code === LF || code === CR) {
      this.endField();
      return this.afterField(text, i, code);
    }
    this.stray();
    this.at = At.Unquoted;
    return i;
  }

  private afterField(text: string, i: number, code: number): number {
    if (code === this.delimiter) {
      // A delimiter promises one more field, even at the end of the file.
      return i + 1;
    }
    this.line++;
    this.endRecord();
    if (code === LF) return i + 1;
    if (i + 1 === text.length) this.skipLineFeed = true;
    return text.charCodeAt(i + 1) === LF ? i + 2 : i + 1;
  }

  private countLines(piece: string, open: boolean): void {
    for (let i = 0; i < piece.length; i++) {
      const code = piece.charCodeAt(i);
      if (code === LF) this.line++;
      else if (code === CR) {
        if (piece.charCodeAt(i + 1) === LF) i++;
        else if (i + 1 === piece.length && open) this.skipLineFeed = true;
        this.line++;
      }
    }
  }

  private append(piece: string): void {
    if (this.tooLarge) return;
    if (this.part.length + piece.length > this.mostCharacters) {
      this.tooLarge = true;
      this.sink.cellTooLarge(this.fieldLine, this.fields.length);
      return;
    }
    this.part = this.part === '' ? piece : this.part + piece;
  }

  private stray(): void {
    if (this.strayed) return;
    this.strayed = true;
    this.sink.strayQuote(this.line);
  }

  private endField(): void {
    const text = this.part;
    if (this.nulSeen && text.includes('\0')) this.sink.nul(this.fieldLine, this.fields.length);
    this.fields.push(this.trim && !this.quoted ? trimEnd(text, 0, text.length, this.delimiter) : text);
    this.part = '';
    this.quoted = false;
    this.tooLarge = false;
    this.at = At.Start;
  }

  private endRecord(): void {
    const blank = this.fields.length === 1 && this.fields[0] === '' && !this.anyQuoted;
    this.sink.record(this.fields, this.recordLine, blank);
    this.fields.length = 0;
    this.anyQuoted = false;
    this.strayed = false;
    this.recordLine = this.line;
  }
}

function trimEnd(text: string, from: number, to: number, delimiter: number): string {
  let end = to;
  while (end > from) {
    const code = text.charCodeAt(end - 1);
    if ((code === BLANK || code === TAB) && code !== delimiter) end--;
    else break;
  }
  return text.slice(from, end);
}
