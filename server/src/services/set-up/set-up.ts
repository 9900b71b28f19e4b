import { readFile, rm, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import type { Transaction } from 'sequelize';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { inTransaction } from '../../database/transaction';
import { Problem, conflict } from '../../problems/problem';
import { hashToken, makeToken } from '../one-time-token';
import { demandGoodPassword } from '../passwords/accept';
import { hashPassword } from '../passwords/prepare';
import { createPerson } from '../people/create';

const lock = 7_415_004;

/** Open outside the demo for as long as nobody has ever been admin. */
export async function setUpIsOpen({ sequelize, config }: Context, tx?: Transaction): Promise<boolean> {
  if (config.demo) return false;
  const [{ none }] = await rows<{ none: boolean }>(
    sequelize,
    `SELECT NOT EXISTS (SELECT 1 FROM person_roles WHERE role = 'admin') AS none`,
    [],
    tx,
  );
  return none;
}

const fileOf = ({ config }: Context): string => join(config.dataFolder, 'set-up-token');

/**
 * Makes sure there is a one-time token while the set-up is open, in a file only the server's account can read, and gives it back; null when
 * the set-up is closed. A token whose file is still there is kept, so that a restart does not void what was noted down.
 */
export async function ensureSetUpToken(context: Context): Promise<string | null> {
  return inTransaction(context.sequelize, async (tx) => {
    await rows(context.sequelize, 'SELECT pg_advisory_xact_lock($1)', [lock], tx);
    if (!(await setUpIsOpen(context, tx))) return null;
    const kept = await readFile(fileOf(context), 'utf8').then((text) => text.trim(), () => null); // prettier-ignore
    if (kept !== null && (await isGood(context, kept, tx))) return kept;
    const { token, hash } = makeToken();
    await rows(context.sequelize, 'INSERT INTO setup_tokens (token_hash) VALUES ($1) RETURNING token_hash', [hash], tx);
    await writeFile(fileOf(context), `${token}\n`, { mode: 0o600 });
    return token;
  });
}

/** Makes the first admin. @throws Problem 409 when the set-up is closed, 403 for a wrong token, 422 for a password on the blocklist */
export async function setUp(
  context: Context,
  asked: { token: string; name: string; email: string; password: string },
): Promise<{ email: string }> {
  if (!(await setUpIsOpen(context)))
    throw conflict('set-up-closed', 'The first admin was made already. Ask an admin for an invitation.');
  if (!(await isGood(context, asked.token)))
    throw new Problem(403, 'token-wrong', 'This is not the token that the server wrote at its start.');
  demandGoodPassword('password', asked.password, [asked.name, asked.email]);
  const passwordHash = await hashPassword(context, asked.password);
  const made = await inTransaction(context.sequelize, async (tx) => {
    await rows(context.sequelize, 'SELECT pg_advisory_xact_lock($1)', [lock], tx);
    if (!(await setUpIsOpen(context, tx)))
      throw conflict('set-up-closed', 'The first admin was made already. Ask an admin for an invitation.');
    await rows(context.sequelize, 'UPDATE setup_tokens SET used_at = now() WHERE used_at IS NULL RETURNING used_at', [], tx);
    return createPerson(tx, { name: asked.name, email: asked.email, passwordHash, roles: ['admin'], by: 'set-up' });
  });
  await rm(fileOf(context), { force: true });
  return { email: made.email };
}

async function isGood({ sequelize }: Context, token: string, tx?: Transaction): Promise<boolean> {
  const found = await rows(
    sequelize,
    'SELECT 1 FROM setup_tokens WHERE token_hash = $1 AND used_at IS NULL',
    [hashToken(token)],
    tx,
  );
  return found.length > 0;
}
