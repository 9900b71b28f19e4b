import type { Encoding } from '@tallystone/contracts/specification/types';

const LF = 10;
const CR = 13;

/**
 * Finds where physical lines (from 1) of a file begin, in bytes from its beginning, while its bytes go by. Lines end with LF, CR or both, as the
 * scanner counts them; a mark of the byte order belongs to the first.
 *
 * @example
 * const found = new LineStarts('utf-8', [2, 3]);
 * found.push(Buffer.from('a,b\r')); // true: a line is still to come
 * found.push(Buffer.from('\n1,2\r\n3\r\n')); // false
 * found.startOf(3) // 10
 */
export class LineStarts {
  private readonly starts = new Map<number, number>();
  private readonly wanted: ReadonlySet<number>;
  private readonly last: number;
  private readonly wide: boolean;
  private line = 1;
  private at = 0;
  /** Where the latest CR ended: an LF there ends the same line. */
  private returned = -1;
  /** Of a unit of UTF-16 whose other byte is still to come. */
  private half = 0;

  constructor(
    private readonly encoding: Encoding,
    lines: Iterable<number>,
  ) {
    this.wanted = new Set(lines);
    this.last = [...this.wanted].reduce((most, line) => Math.max(most, line), 0);
    this.wide = encoding.startsWith('utf-16');
    if (this.wanted.has(1)) this.starts.set(1, 0);
  }

  /** Where a wanted line begins; of one that has not come, the end of what has. */
  startOf(line: number): number {
    return this.starts.get(line) ?? this.at;
  }

  /** @returns whether lines are still to come; bytes that follow are of no use once there are none */
  push(bytes: Uint8Array): boolean {
    const { encoding, wide } = this;
    const unit = wide ? 2 : 1;
    let { at, half } = this;
    for (let i = 0; i < bytes.length && this.line <= this.last; i++) {
      let code = bytes[i];
      if (wide) {
        if (at % 2 === 0) {
          half = code;
          at++;
          continue;
        }
        code = encoding === 'utf-16be' ? (half << 8) | code : (code << 8) | half;
      }
      at++;
      if (code === LF && at === this.returned + unit) {
        if (this.starts.has(this.line)) this.starts.set(this.line, at);
      } else if (code === LF || code === CR) {
        if (code === CR) this.returned = at;
        this.line++;
        if (this.wanted.has(this.line)) this.starts.set(this.line, at);
      }
    }
    this.at = at;
    this.half = half;
    return this.line <= this.last;
  }
}
