import { createHash } from 'node:crypto';
import canonicalize from 'canonicalize';
import type { EvidenceItem } from './input';

/**
 * One fingerprint over a version's evidence: SHA-256 of the RFC 8785 canonical JSON of [number, sha256] pairs in order of number. It changes when any
 * piece of evidence is added, dropped or altered.
 */
export function evidenceFingerprint(evidence: readonly EvidenceItem[]): string {
  const pairs = [...evidence]
    .sort((first, second) => ordinal(first) - ordinal(second))
    .map(({ number, sha256 }) => [number, sha256]);
  return createHash('sha256')
    .update(canonicalize(pairs) ?? '[]')
    .digest('hex');
}

const ordinal = (item: EvidenceItem): number => Number(item.number.slice(2));

/** Enough of a hash to tell two apart by eye. */
export const shortHash = (hash: string): string => hash.slice(0, 16);
