/**
 * The keys that lie outside the database: they sign sessions, hash applicant identifiers and encrypt the raw files.
 * A backup of the database without this file cannot read the raw files again.
 */
import { randomBytes } from 'node:crypto';
import * as fs from 'node:fs';
import * as path from 'node:path';
import { SetupProblem, writePrivately } from './postgres.mjs';

const NAMES = ['session', 'identifiers', 'rawFiles'];

/**
 * Path of the keys file of a data folder, made with random keys when there is none.
 *
 * @throws {SetupProblem} when the file is there but damaged: new keys would make stored raw files unreadable, so none are made
 */
export function ensureKeys(data) {
  const file = path.join(path.resolve(data), 'keys.json');
  if (!fs.existsSync(file)) {
    fs.mkdirSync(path.dirname(file), { recursive: true });
    writePrivately(
      file,
      `${JSON.stringify(Object.fromEntries(NAMES.map((name) => [name, randomBytes(32).toString('base64url')])), null, 2)}\n`,
    );
    return file;
  }
  let keys;
  try {
    keys = JSON.parse(fs.readFileSync(file, 'utf8'));
  } catch {
    keys = {};
  }
  const damaged = NAMES.filter((name) => typeof keys[name] !== 'string' || Buffer.from(keys[name], 'base64url').length < 32);
  if (damaged.length > 0)
    throw new SetupProblem(
      `The keys file ${file} is damaged (${damaged.join(', ')}). Bring it back from a backup: new keys could not read the stored raw files.`,
    );
  return file;
}
