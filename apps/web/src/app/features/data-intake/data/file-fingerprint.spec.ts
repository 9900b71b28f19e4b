import { fingerprint } from './file-fingerprint';

/** What the browser itself makes of the whole at once. */
async function byTheBrowser(bytes: Uint8Array<ArrayBuffer>): Promise<string> {
  const digest = new Uint8Array(await crypto.subtle.digest('SHA-256', bytes));
  return Array.from(digest, (byte) => byte.toString(16).padStart(2, '0')).join('');
}

describe('fingerprint of a file', () => {
  it('is that of the standard', async () => {
    // FIPS 180-2, appendix B.1 and B.2, and the empty message (NIST CAVP).
    expect(await fingerprint(new Blob(['abc']), 3)).toBe('ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad');
    const longer = 'abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq';
    expect(await fingerprint(new Blob([longer]), longer.length)).toBe(
      '248d6a61d20638b8e5c026930c3e6039a33ce45964ff2167f6ecedd419db06c1',
    );
    expect(await fingerprint(new Blob([]), 0)).toBe('e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855');
  });

  it('of a part is that of these bytes alone, over many pieces', async () => {
    const bytes = Uint8Array.from({ length: 3 * 1024 * 1024 + 17 }, (_, at) => (at * 2654435761) >>> 24);
    const seen: number[] = [];
    const part = 2 * 1024 * 1024 + 5;
    expect(await fingerprint(new Blob([bytes]), part, { onProgress: (at) => seen.push(at) })).toBe(
      await byTheBrowser(bytes.slice(0, part)),
    );
    expect(seen).toEqual([1024 * 1024, 2 * 1024 * 1024, part]);
    expect(await fingerprint(new Blob([bytes]), bytes.length)).toBe(await byTheBrowser(bytes));
  });

  it('stops when it is told to', async () => {
    const stop = new AbortController();
    const bytes = new Uint8Array(4 * 1024 * 1024);
    const asked = fingerprint(new Blob([bytes]), bytes.length, { signal: stop.signal, onProgress: () => stop.abort() });
    await expect(asked).rejects.toThrow(/abort/i);
  });
});
