import { createHmac } from 'node:crypto';
import { deriveKey } from '../../config/keys';
import type { Context } from '../../context';
import { runInThread } from '../../threads/run-in-thread';

/**
 * What bcrypt is given in place of the password: base64 of its HMAC-SHA-256, because bcrypt reads 72 bytes and no more, after Unicode
 * normalisation (NFKC, NIST SP 800-63B-4), because keyboards differ in how they write the same letter. The key lies outside the database.
 */
export function preparePassword({ config }: Pick<Context, 'config'>, password: string): string {
  return createHmac('sha256', deriveKey(config.keys.identifiers, 'passwords'))
    .update(password.normalize('NFKC'))
    .digest('base64');
}

export function hashPassword(context: Pick<Context, 'config'>, password: string): Promise<string> {
  return runInThread('password.hash', { prepared: preparePassword(context, password) }, { lane: 'passwords' });
}

export function verifyPassword(context: Pick<Context, 'config'>, password: string, hash: string): Promise<boolean> {
  return runInThread('password.verify', { prepared: preparePassword(context, password), hash }, { lane: 'passwords' });
}

/** Verified against when there is no such account, so that the answer takes as long as it does for one. Nobody knows its password. */
export const nobodysHash = '$2b$12$mUytYeP.76gwI/v.5TKv0OVsVp5091YpsZukt98QCQxmmAuBvD6yu';
