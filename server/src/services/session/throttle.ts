import { createHmac } from 'node:crypto';
import { problemCodes } from '@tallystone/contracts/problems/codes';
import { deriveKey } from '../../config/keys';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { inTransaction } from '../../database/transaction';
import { Problem } from '../../problems/problem';

const minutes = 15;
/** From one address to one account; from anywhere to one account; from one address to any account. */
const limits = { both: 10, account: 60, address: 60 };

export interface Try {
  readonly id: string;
  readonly account: Buffer;
  readonly address: string;
}

export type Throttled =
  | { readonly refused: false; readonly attempt: Try }
  | { readonly refused: true; readonly first: boolean; readonly problem: Problem };

/**
 * Counts a sign-in as failed before its password is looked at, and refuses when too many failed already: sends at the same moment cannot
 * slip past each other. `forgive` takes the count back. Accounts are kept as keyed hashes, so that a mistyped password in the wrong field
 * is not stored; accounts that do not exist are counted like others.
 */
export async function countTry({ sequelize, config }: Context, email: string, address: string): Promise<Throttled> {
  const account = createHmac('sha256', deriveKey(config.keys.identifiers, 'sign-in-failures')).update(email).digest();
  return inTransaction(sequelize, async (tx) => {
    for (const key of [`account ${account.toString('hex')}`, `address ${address}`].sort()) {
      await rows(sequelize, `SELECT pg_advisory_xact_lock(hashtextextended('sign-in:' || $1, 0))`, [key], tx);
    }
    const [counts] = await rows<{ both: number; account: number; address: number; seconds: number }>(
      sequelize,
      `SELECT count(*) FILTER (WHERE account = $1 AND address = $2)::int AS both,
              count(*) FILTER (WHERE account = $1)::int AS account,
              count(*) FILTER (WHERE address = $2)::int AS address,
              ceil(extract(epoch FROM coalesce(min(at), now()) + interval '${minutes} minutes' - clock_timestamp()))::int AS seconds
       FROM sign_in_failures WHERE (account = $1 OR address = $2) AND at > clock_timestamp() - interval '${minutes} minutes'`,
      [account, address],
      tx,
    );
    const over = counts.both >= limits.both || counts.account >= limits.account || counts.address >= limits.address;
    if (over && counts.both !== limits.both) return { refused: true, first: false, problem: tooMany(counts.seconds) };
    const [{ id }] = await rows<{ id: string }>(
      sequelize,
      'INSERT INTO sign_in_failures (account, address) VALUES ($1, $2) RETURNING id',
      [account, address],
      tx,
    );
    if (over) return { refused: true, first: true, problem: tooMany(counts.seconds) };
    return { refused: false, attempt: { id, account, address } };
  });
}

/** Takes back what was counted against this account from this address: the password was right. */
export async function forgive({ pool }: Context, attempt: Try): Promise<void> {
  await pool.query('DELETE FROM sign_in_failures WHERE account = $1 AND address = $2', [attempt.account, attempt.address]);
}

function tooMany(seconds: number): Problem {
  const wait = Math.max(1, seconds);
  return new Problem(429, problemCodes.tooMany, `Too many sign-ins failed. Try again in ${Math.ceil(wait / 60)} minutes.`, {
    headers: { 'Retry-After': String(wait) },
  });
}
