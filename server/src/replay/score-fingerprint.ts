import { createHash } from 'node:crypto';
import { evaluateFit, evaluatorOf, PARTITION_NAMES } from './evaluate';
import type { Replayed } from './replay';

/**
 * SHA-256 over the rounded scores of every row with a known outcome (development, hold-out, out-of-time, each in the order of the file), as
 * little-endian 64-bit floats: two replays with the same fingerprint gave every applicant the same whole score.
 *
 * @returns null where a "linear" characteristic is kept: then there is no scorecard
 * @example scoreFingerprint(replay(request))?.sha256
 */
export function scoreFingerprint(
  { prepared, coded, fitted }: Replayed,
  scaling: { scaling: Parameters<typeof evaluatorOf>[0]['scaling'] },
): { sha256: string; count: number } | null {
  const evaluator = evaluatorOf({ ...scaling, weight: null }, prepared, coded, fitted.trained.tables);
  const { scores } = evaluateFit(evaluator, fitted.terms, fitted.model, { figures: 'path' });
  const hash = createHash('sha256');
  let count = 0;
  for (const name of PARTITION_NAMES) {
    const { rounded } = scores[name];
    if (rounded === null) return null;
    const bytes = Buffer.alloc(rounded.length * 8);
    rounded.forEach((score, place) => bytes.writeDoubleLE(score, place * 8));
    hash.update(bytes);
    count += rounded.length;
  }
  return { sha256: hash.digest('hex'), count };
}
