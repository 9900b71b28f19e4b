import { existsSync } from 'node:fs';

/** Where a thread's entry is: beside this file when run from source, under threads/ of the bundle otherwise. */
export function besideThis(name: string): URL {
  const candidates = import.meta.url.endsWith('.ts')
    ? [`./${name}.mjs`]
    : [`./${name}.js`, `./threads/${name}.js`, `../threads/${name}.js`];
  const found = candidates.map((path) => new URL(path, import.meta.url)).find((url) => existsSync(url));
  if (!found) throw new Error(`No thread entry ${name} beside ${import.meta.url}`);
  return found;
}
