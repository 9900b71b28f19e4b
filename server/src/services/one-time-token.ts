import { createHash, randomBytes } from 'node:crypto';

/** A secret that is shown once and kept as its SHA-256 only: 256 random bits need no slower hash. */
export function makeToken(): { readonly token: string; readonly hash: Buffer } {
  const token = randomBytes(32).toString('base64url');
  return { token, hash: hashToken(token) };
}

export const hashToken = (token: string): Buffer => createHash('sha256').update(token).digest();
