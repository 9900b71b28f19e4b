import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { ensureKeys } from '../../tools/keys.mjs';

/** A data folder of a test's own with a fresh keys file in it. */
export interface TestDataFolder {
  readonly path: string;
  readonly keysFile: string;
  remove(): void;
}

/**
 * Makes a data folder for one test file.
 *
 * @example
 * const folder = createTestDataFolder();
 * afterAll(() => folder.remove());
 */
export function createTestDataFolder(): TestDataFolder {
  const path = mkdtempSync(join(tmpdir(), 'tallystone-test-'));
  return { path, keysFile: ensureKeys(path), remove: () => rmSync(path, { recursive: true, force: true }) };
}
