import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { KeyedHash } from './keyed-hash';
import { hashText } from './personal';

describe('keyed hashes of many texts', () => {
  // RFC 4231, test case 2 (from memory): key "Jefe".
  it('are HMAC-SHA-256', () => {
    const first = new KeyedHash(Buffer.from('Jefe')).of('what do ya want for nothing?');
    expect(Buffer.from(first, 'base64url').toString('hex')).toBe('5bdcc146bf60754e6a042426089575c7');
  });

  it('are those of node:crypto, whatever the key and the text', () => {
    fc.assert(
      fc.property(fc.uint8Array({ maxLength: 64 }), fc.array(fc.string({ unit: 'binary', maxLength: 80 })), (key, texts) => {
        const hash = new KeyedHash(Buffer.from(key));
        for (const text of texts) expect(hash.of(text)).toBe(hashText(Buffer.from(key), text));
      }),
      { numRuns: 500 },
    );
  });
});
