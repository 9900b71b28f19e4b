import { compareSync, hashSync } from 'bcryptjs';

/** bcrypt's cost: 2^12 rounds, about half a second on a small machine. */
const cost = 12;

/**
 * bcrypt of a prepared password (base64 of an HMAC-SHA-256, 44 bytes, because bcrypt reads no more than 72). Synchronous on purpose: it has
 * a thread to itself.
 */
export function hashPassword({ prepared }: { readonly prepared: string }): string {
  return hashSync(prepared, cost);
}

export function verifyPassword({ prepared, hash }: { readonly prepared: string; readonly hash: string }): boolean {
  return compareSync(prepared, hash);
}
