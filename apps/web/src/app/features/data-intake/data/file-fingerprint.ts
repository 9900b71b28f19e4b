import { sha256 } from '@noble/hashes/sha2';
import { bytesToHex } from '@noble/hashes/utils';

/** Hashed between two turns of the page: a few milliseconds, so that it stays alive with a file of 1 GiB. */
const pieceBytes = 1024 * 1024;

/**
 * SHA-256 (FIPS 180-4) of the first `length` bytes of a file, in hex, read piece by piece: the file is never in memory as a whole.
 *
 * @param onProgress told the bytes hashed so far
 * @throws AbortError when the signal says so; NotReadableError when the file was changed or removed since it was chosen
 * @example
 * await fingerprint(new Blob(['abc']), 3); // 'ba7816bf…' (FIPS 180-2, appendix B.1)
 */
export async function fingerprint(
  file: Blob,
  length: number,
  { signal, onProgress }: { signal?: AbortSignal; onProgress?: (bytes: number) => void } = {},
): Promise<string> {
  const hash = sha256.create();
  for (let from = 0; from < length; from += pieceBytes) {
    signal?.throwIfAborted();
    const to = Math.min(length, from + pieceBytes);
    hash.update(new Uint8Array(await file.slice(from, to).arrayBuffer()));
    onProgress?.(to);
  }
  return bytesToHex(hash.digest());
}
