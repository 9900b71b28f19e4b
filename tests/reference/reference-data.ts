import { readFileSync } from 'node:fs';

const at = (name: string): URL => new URL(name, import.meta.url);

/** Figures of each expected file that nothing has read yet, by path. */
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

/** A data file as text by column. These files hold no quoted separators. */
export class Table {
  private readonly places: Map<string, number>;
  private readonly rows: string[][];

  /** @param file an address, or a name in tests/reference */
  constructor(file: string | URL) {
    const lines = readFileSync(typeof file === 'string' ? at(file) : file, 'utf8')
      .trim()
      .split('\n');
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

/** Paths of the figures of an expected file that nothing has read yet. */
export function unreadFiguresOf(name: string): string[] {
  return [...(unread.get(name) ?? [])];
}
