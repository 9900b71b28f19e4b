import { createHmac } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { z } from 'zod';

const Key = z.string().transform((text, check) => {
  const bytes = Buffer.from(text, 'base64url');
  if (bytes.length < 32) check.addIssue({ code: 'custom', message: 'needs at least 32 bytes, base64' });
  return bytes;
});
const KeysFile = z.object({ session: Key, identifiers: Key, rawFiles: Key });

/** The secrets that lie outside the database: they sign sessions, hash identifiers of applicants and encrypt the raw files. */
export type Keys = z.output<typeof KeysFile>;

/**
 * Reads the keys file (JSON with base64 or base64url texts).
 *
 * @throws Error that names the file and every key that is missing or too short
 */
export function readKeys(path: string): Keys {
  let content: unknown;
  try {
    content = JSON.parse(readFileSync(path, 'utf8'));
  } catch (cause) {
    throw new Error(`the keys file ${path} cannot be read: ${cause instanceof Error ? cause.message : String(cause)}`);
  }
  const keys = KeysFile.safeParse(content);
  if (!keys.success)
    throw new Error(
      `the keys file ${path}: ${keys.error.issues.map((issue) => `${issue.path.join('.')} ${issue.message}`).join('; ')}`,
    );
  return keys.data;
}

/** A key of its own for each use, derived so that a value made for one purpose proves nothing for another. */
export function deriveKey(key: Buffer, purpose: string): Buffer {
  return createHmac('sha256', key).update(`tallystone:${purpose}`).digest();
}
