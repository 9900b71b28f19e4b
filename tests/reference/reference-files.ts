import { readFileSync } from 'node:fs';
import { expect } from 'vitest';

const at = (name: string): URL => new URL(name, import.meta.url);

/** A JSON file of expected numbers; the caller states the shape it reads. */
export function expected<T>(name: string): T {
  return JSON.parse(readFileSync(at(`expected/${name}`), 'utf8')) as T;
}

/** A data file as text by column. These files hold no quoted separators. */
export class Table {
  private readonly places: Map<string, number>;
  private readonly rows: string[][];

  constructor(name: string) {
    const lines = readFileSync(at(name), 'utf8').trim().split('\n');
    this.rows = lines.slice(1).map((line) => line.split(','));
    this.places = new Map(lines[0].split(',').map((column, place) => [column, place]));
  }

  get columns(): string[] {
    return [...this.places.keys()];
  }

  get length(): number {
    return this.rows.length;
  }

  text(column: string): string[] {
    const place = this.places.get(column);
    if (place === undefined) throw new Error(`no column ${column}`);
    return this.rows.map((row) => row[place]);
  }

  numbers(column: string): Float64Array {
    return Float64Array.from(this.text(column), (cell) => {
      if (cell === '' || Number.isNaN(Number(cell))) throw new Error(`${column} holds "${cell}"`);
      return Number(cell);
    });
  }

  /** The reference files fit the event; here 1 is good, so the outcome is 1 - event. */
  goods(event: string): Uint8Array {
    return Uint8Array.from(this.numbers(event), (value) => 1 - value);
  }
}

/** |actual - expected| <= tolerance, with both numbers in the message. */
export function expectNear(actual: number, wanted: number, tolerance: number, what = ''): void {
  expect(Math.abs(actual - wanted), `${what} ${actual} against ${wanted}`).toBeLessThanOrEqual(tolerance);
}

/** A printed figure: half a unit of its last digit. */
export function expectPrinted(actual: number, printed: number, digits: number, what = ''): void {
  expectNear(actual, printed, 0.5 * 10 ** -digits + 1e-9, what);
}
