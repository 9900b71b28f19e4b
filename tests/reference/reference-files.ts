import { readFileSync } from 'node:fs';
import { expect } from 'vitest';

const at = (name: string): URL => new URL(name, import.meta.url);

/** Figures of each expected file that no check has read yet, by path. */
const unread = new Map<string, Set<string>>();

function figuresOf(value: unknown, path: string, into: Set<string>): void {
  if (typeof value === 'object' && value !== null)
    Object.entries(value).forEach(([key, inner]) => figuresOf(inner, path === '' ? key : `${path}/${key}`, into));
  else if (typeof value !== 'string') into.add(path);
}

/** The same values; whatever is read is taken off the list. */
function watched<T extends object>(root: T, left: Set<string>): T {
  const proxies = new WeakMap<object, object>();
  const watch = (value: object, path: string): object => {
    const known = proxies.get(value);
    if (known) return known;
    const proxy = new Proxy(value, {
      get(target, key): unknown {
        const inner: unknown = Reflect.get(target, key);
        if (typeof key === 'symbol' || !Object.hasOwn(target, key)) return inner;
        const own = path === '' ? key : `${path}/${key}`;
        if (typeof inner === 'object' && inner !== null) return watch(inner, own);
        left.delete(own);
        return inner;
      },
    });
    proxies.set(value, proxy);
    return proxy;
  };
  return watch(root, '') as T;
}

/**
 * A JSON file of expected numbers; the caller states the shape it reads. What is read of it is remembered, so that `expectAllRead` can tell which
 * figures no check has looked at.
 */
export function expected<T extends object>(name: string): T {
  const root = JSON.parse(readFileSync(at(`expected/${name}`), 'utf8')) as T;
  let left = unread.get(name);
  if (!left) {
    left = new Set();
    figuresOf(root, '', left);
    unread.set(name, left);
  }
  return watched(root, left);
}

/**
 * The last check of a file: every figure (number, true, false, null) of it has been read by a check before this one, but for those that are named
 * here with the reason. A name is a path, in which * stands for one step and ** for any number of them.
 */
export function expectAllRead(name: string, but: Readonly<Record<string, string>> = {}): void {
  const left = [...(unread.get(name) ?? [])];
  const named = Object.keys(but).map((path) => ({
    path,
    pattern: new RegExp(
      `^${path
        .split('/')
        .map((step) => (step === '**' ? '.+' : step === '*' ? '[^/]+' : step.replace(/[.+]/g, '\\$&')))
        .join('/')}$`,
    ),
  }));
  const surprising = left.filter((path) => !named.some(({ pattern }) => pattern.test(path)));
  // Paths alike but for their numbers are shown once.
  const shown = [...new Set(surprising.map((path) => path.replace(/(^|\/)\d+(?=\/|$)/g, '$1#')))];
  expect(shown, `figures of ${name} that nothing checks`).toEqual([]);
  expect(
    named.filter(({ pattern }) => !left.some((path) => pattern.test(path))).map(({ path }) => path),
    `named as unchecked in ${name}, but checked or gone`,
  ).toEqual([]);
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
