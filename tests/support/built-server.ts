import { existsSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { ensureBuilt } from '../../tools/build.mjs';

/** Once for all tests: builds the server unless it lies in dist/ as its sources are now. */
export default async function buildServer(): Promise<void> {
  await ensureBuilt('server');
}

/**
 * A file of the built server: `main`, or one of `cli` and `threads`.
 *
 * @throws when it has not been built
 * @example
 * execFileSync(process.execPath, [fileURLToPath(builtFile('cli/replicate')), '--help']);
 */
export function builtFile(name: string): URL {
  const file = new URL(`../../dist/server/${name}.js`, import.meta.url);
  if (!existsSync(file)) throw new Error(`${fileURLToPath(file)} is not there: node tools/build.mjs server`);
  return file;
}

/** As a path, for processes. */
export const builtPath = (name: string): string => fileURLToPath(builtFile(name));
