import { createDecipheriv, randomBytes, randomUUID } from 'node:crypto';
import { inflateRawSync } from 'node:zlib';
import { describe, expect, it } from 'vitest';
import { openChunk, sealChunk } from './rawFiles';

/**
 * What lies in the database of a raw file. Its bytes are deflated first, so that a text is not found in them in any case: what is shown here is
 * that nothing inflates without the key, and that nothing opens but the chunk itself, in its place, under its key.
 */
const key = randomBytes(32);
const file = randomUUID();
const text = Buffer.from(
  Array.from({ length: 5000 }, (_, row) => `SM-${String(row).padStart(6, '0')},2024-03-01,${row * 7}`).join('\n'),
);
const nonceBytes = 12;
const tagBytes = 16;

/** Whatever inflates (RFC 1951) of the bytes from each place on that a deflated stream could begin at. */
function inflated(bytes: Buffer): string[] {
  const found: string[] = [];
  for (let from = 0; from <= nonceBytes + tagBytes + 4; from++) {
    try {
      found.push(inflateRawSync(bytes.subarray(from)).toString('latin1'));
    } catch {
      // No deflated stream, as it should be.
    }
  }
  return found;
}

describe('a chunk of a raw file', () => {
  it('opens under its key, in its place', async () => {
    const sealed = await sealChunk(key, file, 3, text);
    expect((await openChunk(key, file, 3, sealed)).equals(text)).toBe(true);
    const none = await sealChunk(key, file, 4, Buffer.alloc(0));
    expect((await openChunk(key, file, 4, none)).length).toBe(0);
  });

  it('gives nothing to whoever inflates it without the key', async () => {
    // That this would find a text where it is only deflated: the cipher undone, and the bytes put where the ciphertext lies.
    const sealed = await sealChunk(key, file, 0, text);
    const open = withoutCipher(sealed);
    expect(inflated(open).some((one) => one.includes('SM-000123'))).toBe(true);
    for (let time = 0; time < 20; time++) {
      const stored = await sealChunk(key, file, time, text);
      expect(inflated(stored).filter((one) => one.includes('SM-0'))).toEqual([]);
    }
  });

  it('looks different each time, and like chance', async () => {
    const [first, second] = [await sealChunk(key, file, 0, text), await sealChunk(key, file, 0, text)];
    expect(first.equals(second)).toBe(false);
    expect(first.subarray(0, nonceBytes).equals(second.subarray(0, nonceBytes))).toBe(false);
    // Pearson's chi-squared over 256 byte values: 255 degrees of freedom, of which one in a thousand million lies above 415 (Wilson and Hilferty 1931).
    const counts = new Uint32Array(256);
    for (const byte of first.subarray(nonceBytes + tagBytes)) counts[byte]++;
    const expected = (first.length - nonceBytes - tagBytes) / 256;
    expect(counts.reduce((sum, count) => sum + (count - expected) ** 2 / expected, 0)).toBeLessThan(420);
  });

  it('does not open under another key', async () => {
    const sealed = await sealChunk(key, file, 0, text);
    const nearly = Buffer.from(key);
    nearly[31] ^= 1;
    for (const other of [randomBytes(32), nearly])
      await expect(openChunk(other, file, 0, sealed)).rejects.toThrow(/authenticate/);
  });

  it('does not open with any byte changed, or cut', async () => {
    const sealed = await sealChunk(key, file, 0, text);
    // The nonce, the tag, and places all over the ciphertext.
    const places = Array.from({ length: nonceBytes + tagBytes }, (_, at) => at);
    for (let at = places.length; at < sealed.length; at += 101) places.push(at);
    places.push(sealed.length - 1);
    for (const at of places) {
      const changed = Buffer.from(sealed);
      changed[at] ^= 0x10;
      await expect(openChunk(key, file, 0, changed), `byte ${at}`).rejects.toThrow(/authenticate/);
    }
    await expect(openChunk(key, file, 0, sealed.subarray(0, -1))).rejects.toThrow(/authenticate/);
    await expect(openChunk(key, file, 0, Buffer.concat([sealed, Buffer.alloc(1)]))).rejects.toThrow(/authenticate/);
  });

  it('does not open in the place of another, or as one of another file', async () => {
    const [first, second] = [
      await sealChunk(key, file, 0, text.subarray(0, 1000)),
      await sealChunk(key, file, 1, text.subarray(1000)),
    ];
    await expect(openChunk(key, file, 1, first)).rejects.toThrow(/authenticate/);
    await expect(openChunk(key, file, 0, second)).rejects.toThrow(/authenticate/);
    await expect(openChunk(key, randomUUID(), 0, first)).rejects.toThrow(/authenticate/);
  });
});

/** The chunk as it would be stored if it were only deflated. */
function withoutCipher(sealed: Buffer): Buffer {
  const decipher = createDecipheriv('aes-256-gcm', key, sealed.subarray(0, nonceBytes));
  decipher.setAAD(Buffer.from(`${file}:0`));
  decipher.setAuthTag(sealed.subarray(nonceBytes, nonceBytes + tagBytes));
  const plain = Buffer.concat([decipher.update(sealed.subarray(nonceBytes + tagBytes)), decipher.final()]);
  return Buffer.concat([sealed.subarray(0, nonceBytes + tagBytes), plain]);
}
