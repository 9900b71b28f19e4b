import { hash } from 'node:crypto';

/** Pseudo-random order that is the same on every machine: by SHA-256 of a text. */

/**
 * Sorts by key, ascending as unsigned bytes; equal keys (the same text twice) keep their order.
 * @param count number of things; @param textOf what thing i is keyed by, hashed as UTF-8
 * @returns the places of the things in key order
 * @example orderByKey(3, (i) => `7:${i + 1}`)
 * Source: FIPS 180-4.
 */
export function orderByKey(count: number, textOf: (index: number) => string): Uint32Array {
  const digests = Buffer.alloc(count * 32);
  const leading = new Float64Array(count);
  const order = new Uint32Array(count);
  for (let index = 0; index < count; index++) {
    const digest = hash('sha256', textOf(index), 'buffer');
    digest.copy(digests, index * 32);
    // 48 bits compare as a double and decide nearly always.
    leading[index] = digest.readUIntBE(0, 6);
    order[index] = index;
  }
  return order.sort(
    (a, b) => leading[a] - leading[b] || digests.compare(digests, b * 32, b * 32 + 32, a * 32, a * 32 + 32) || a - b,
  );
}
