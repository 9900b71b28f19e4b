import { createHash } from 'node:crypto';
import canonicalize from 'canonicalize';

/**
 * Canonical JSON (RFC 8785): keys in the order of their UTF-16 code units, numbers as ECMAScript writes them, no blanks.
 * @throws for NaN and infinities, which JSON cannot carry
 * @example canonicalJson({ b: 1, a: [0.1, 'é'] }) // '{"a":[0.1,"é"],"b":1}'
 */
export function canonicalJson(value: unknown): string {
  const text = canonicalize(value);
  if (text === undefined) throw new TypeError('This value has no JSON form.');
  return text;
}

/** SHA-256 over canonical JSON, lower-case hexadecimal: the hash of a specification is the hash of its JSON as it stands. */
export function fingerprint(value: unknown): string {
  return createHash('sha256').update(canonicalJson(value), 'utf8').digest('hex');
}
