/** One line of the table: how far this library is from a source, and how far it may be. */
export interface Row {
  readonly check: string;
  readonly source: string;
  /** Largest difference found; NaN counts as failed. */
  readonly difference: number;
  readonly tolerance: number;
}

/** What was checked and what could not be. */
export class Report {
  readonly rows: Row[] = [];
  private readonly left: string[] = [];

  add(check: string, source: string, difference: number, tolerance: number): void {
    this.rows.push({ check, source, difference, tolerance });
  }

  /** Something that was not checked, and what it would take. */
  notChecked(what: string): void {
    this.left.push(what);
  }

  get failed(): Row[] {
    return this.rows.filter((row) => !passes(row));
  }

  /** The table, the list of what was left out and a last line that counts. */
  text(): string {
    const heads = ['check', 'source', 'largest difference', 'tolerance', 'pass'];
    const cells = this.rows.map((row) => [
      row.check,
      row.source,
      row.difference.toExponential(1),
      row.tolerance.toExponential(0),
      passes(row) ? 'yes' : 'NO',
    ]);
    const widths = heads.map((head, c) => Math.max(head.length, ...cells.map((line) => line[c].length)));
    const line = (values: string[]): string => `| ${values.map((value, c) => value.padEnd(widths[c])).join(' | ')} |`;
    return [
      line(heads),
      line(widths.map((width) => '-'.repeat(width))),
      ...cells.map(line),
      '',
      ...this.left.map((what) => `Not checked: ${what}`),
      `${this.rows.length - this.failed.length} passed, ${this.failed.length} failed`,
    ].join('\n');
  }
}

const passes = ({ difference, tolerance }: Row): boolean => difference <= tolerance;

/** Keeps the largest of what it is shown; NaN stays. */
export class Largest {
  value = 0;

  /** The distance of two numbers, in units of `unit`. Equal infinities are no distance. */
  see(actual: number, wanted: number, unit = 1): void {
    if (actual === wanted) return;
    const distance = Math.abs(actual - wanted) / unit;
    if (!(distance <= this.value)) this.value = distance;
  }

  /** Distances of two lists of numbers; another length is as far as can be. */
  all(actual: ArrayLike<number>, wanted: ArrayLike<number>, unit: (wanted: number) => number = () => 1): void {
    if (actual.length !== wanted.length) this.value = Infinity;
    for (let i = 0; i < wanted.length; i++) this.see(actual[i], wanted[i], unit(wanted[i]));
  }
}

/** For figures of any size: differences count as shares of the figure once it is above 1. */
export const orOne = (wanted: number): number => Math.max(1, Math.abs(wanted));
