import { existsSync } from 'node:fs';

/** Files that a thread or a process of its own starts with. */
export type EntryName = 'threads/entry' | 'threads/helper-entry' | 'cli/replicate-stored';

/**
 * Where such a file is: in the bundle when built, TypeScript beside this one (or what registers tsx before it) when run from source.
 *
 * @throws when there is none, as in an incomplete installation
 * @example
 * new Worker(entryFile('threads/entry'));
 */
export function entryFile(name: EntryName): URL {
  const candidates = import.meta.url.endsWith('.ts') ? [`../${name}.mjs`, `../${name}.ts`] : [`./${name}.js`, `../${name}.js`];
  const found = candidates.map((path) => new URL(path, import.meta.url)).find((url) => existsSync(url));
  if (!found) throw new Error(`No ${name} beside ${import.meta.url}`);
  return found;
}
