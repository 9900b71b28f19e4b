import { readFileSync } from 'node:fs';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { hashModule } from '../../../../tools/kernels.mjs';
import { hashText } from '../personal';
import { KeyedHash, hashBytes } from './keyed-hash';

describe('keyed hashes of many texts', () => {
  // RFC 4231, test case 2 (from memory): key "Jefe".
  it('are HMAC-SHA-256', () => {
    const first = new KeyedHash(Buffer.from('Jefe')).of('what do ya want for nothing?');
    expect(Buffer.from(first, 'base64url').toString('hex')).toBe('5bdcc146bf60754e6a042426089575c7');
  });

  it('are those of node:crypto, whatever the key and the texts, however many are worked through at once', () => {
    fc.assert(
      fc.property(fc.uint8Array({ maxLength: 64 }), fc.array(fc.string({ unit: 'binary', maxLength: 80 })), (key, texts) => {
        const hash = new KeyedHash(Buffer.from(key));
        const bytes = texts.map((text) => Buffer.from(text));
        const into = Buffer.alloc(hashBytes * texts.length);
        bytes.forEach((one, place) => hash.write(one, 0, one.length, into, place * hashBytes));
        hash.finish();
        texts.forEach((text, place) => {
          const expected = hashText(Buffer.from(key), text);
          expect(into.toString('latin1', place * hashBytes, (place + 1) * hashBytes)).toBe(expected);
          expect(hash.of(text)).toBe(expected);
        });
      }),
      { numRuns: 500 },
    );
  });

  it('are worked out by the kernel that its source gives', async () => {
    expect(readFileSync(new URL('./bytes.ts', import.meta.url), 'utf8')).toBe(await hashModule());
  });
});
