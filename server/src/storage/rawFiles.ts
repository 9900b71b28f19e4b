import { createCipheriv, createDecipheriv, randomBytes } from 'node:crypto';
import { promisify } from 'node:util';
import { deflateRaw, inflateRaw } from 'node:zlib';
import type { Sequelize, Transaction } from 'sequelize';
import { readBytes } from '../database/read-bytes';
import { rows } from '../database/sql';
import { refuseErased } from './erasure';

/** A raw file is kept in pieces of at most this many bytes: what is sent again when a connection breaks. */
export const chunkBytes = 8 * 1024 * 1024;

const compress = promisify(deflateRaw);
const expand = promisify(inflateRaw);
const nonceBytes = 12;
const tagBytes = 16;

/** Binds a chunk to its file and place, so that chunks cannot be swapped. */
const place = (fileId: string, sequence: number): Buffer => Buffer.from(`${fileId}:${sequence}`, 'utf8');

/**
 * Deflates (RFC 1951) and encrypts one chunk: AES-256-GCM (NIST SP 800-38D) with a random nonce of 96 bits. The result is nonce, tag,
 * ciphertext.
 */
export async function sealChunk(key: Buffer, fileId: string, sequence: number, bytes: Buffer): Promise<Buffer> {
  const nonce = randomBytes(nonceBytes);
  const cipher = createCipheriv('aes-256-gcm', key, nonce);
  cipher.setAAD(place(fileId, sequence));
  const sealed = cipher.update(await compress(bytes, { level: 3 }));
  const last = cipher.final();
  return Buffer.concat([nonce, cipher.getAuthTag(), sealed, last]);
}

/** @throws when the chunk was altered, belongs elsewhere or was sealed with another key */
export async function openChunk(key: Buffer, fileId: string, sequence: number, content: Uint8Array): Promise<Buffer> {
  const decipher = createDecipheriv('aes-256-gcm', key, content.subarray(0, nonceBytes), { authTagLength: tagBytes });
  decipher.setAAD(place(fileId, sequence));
  decipher.setAuthTag(content.subarray(nonceBytes, nonceBytes + tagBytes));
  const opened = decipher.update(content.subarray(nonceBytes + tagBytes));
  // GCM leaves nothing for the end; this checks the tag.
  decipher.final();
  // In one piece, with a little room so that its end is found in it: many small ones would have to be copied together.
  return expand(opened, { chunkSize: Math.min(chunkBytes + 1024, Math.max(1 << 16, 32 * opened.length)) });
}

/** Appends one chunk; the caller moves the file's offset in the same transaction. */
export async function storeChunk(
  sequelize: Sequelize,
  tx: Transaction,
  chunk: { fileId: string; sequence: number; start: number; length: number; content: Buffer },
): Promise<void> {
  await sequelize.query('INSERT INTO raw_chunks (file_id, sequence, start, length, content) VALUES ($1, $2, $3, $4, $5)', {
    bind: [chunk.fileId, chunk.sequence, chunk.start, chunk.length, chunk.content],
    transaction: tx,
  });
}

async function readChunk(sequelize: Sequelize, key: Buffer, fileId: string, sequence: number): Promise<Buffer | null> {
  const [found] = await readBytes(sequelize, {
    text: 'SELECT content FROM raw_chunks WHERE file_id = $1 AND sequence = $2',
    values: [fileId, sequence],
  });
  return found ? openChunk(key, fileId, sequence, found) : null;
}

/** Chunks that are fetched and opened while the one before them is used. */
const chunksAhead = 2;

/**
 * The chunks of a file in order, opened, a few in memory at a time.
 *
 * @throws Problem 409 where the rows of its sample were erased
 */
export async function* readChunks(
  sequelize: Sequelize,
  key: Buffer,
  fileId: string,
  signal?: AbortSignal,
): AsyncGenerator<Buffer> {
  const fetch = (sequence: number): Promise<Buffer | null> => readChunk(sequelize, key, fileId, sequence);
  const coming: Promise<Buffer | null>[] = [];
  const ask = (sequence: number): void => {
    const chunk = fetch(sequence);
    // Heard where it is awaited; a reader that stops before has no use for it.
    chunk.catch(() => undefined);
    coming.push(chunk);
  };
  for (let sequence = 0; sequence < chunksAhead; sequence++) ask(sequence);
  for (let sequence = chunksAhead; ; sequence++) {
    signal?.throwIfAborted();
    const chunk = await coming.shift();
    if (!chunk) {
      // The end of the file, or of what is kept of it.
      await refuseErased(sequelize, { rawFileId: fileId });
      return;
    }
    ask(sequence);
    yield chunk;
  }
}

/**
 * The bytes of a sample's raw file, as they were sent. For reading, re-reading and replication only.
 *
 * @example
 * for await (const bytes of readRawFile(sequelize, config.keys.rawFiles, sampleId)) hash.update(bytes);
 */
export async function* readRawFile(
  sequelize: Sequelize,
  key: Buffer,
  sampleId: string,
  signal?: AbortSignal,
): AsyncGenerator<Buffer> {
  const [sample] = await rows<{ rawFileId: string; size: string }>(
    sequelize,
    'SELECT raw_file_id AS "rawFileId", size FROM samples WHERE id = $1',
    [sampleId],
  );
  if (!sample) throw new Error(`There is no sample ${sampleId}`);
  let bytes = 0;
  for await (const chunk of readChunks(sequelize, key, sample.rawFileId, signal)) {
    bytes += chunk.length;
    yield chunk;
  }
  if (bytes !== Number(sample.size)) throw new Error(`The raw file of sample ${sampleId} has ${bytes} of ${sample.size} bytes`);
}

/**
 * Parts of a file, each from where it starts on, and shorter at the end of the file. Only chunks that a part lies in are opened, each once where parts
 * are in ascending order.
 *
 * @throws Problem 409 where the rows of its sample were erased
 * @example
 * const [head] = await readRawParts(sequelize, key, fileId, { starts: [0], length: 100 });
 */
export async function readRawParts(
  sequelize: Sequelize,
  key: Buffer,
  fileId: string,
  { starts, length }: { readonly starts: readonly number[]; readonly length: number },
): Promise<Buffer[]> {
  const chunks = (
    await rows<{ sequence: number; start: string; length: number }>(
      sequelize,
      'SELECT sequence, start, length FROM raw_chunks WHERE file_id = $1 ORDER BY sequence',
      [fileId],
    )
  ).map((chunk) => ({ ...chunk, start: Number(chunk.start) }));
  let latest: { readonly sequence: number; readonly bytes: Promise<Buffer | null> } | undefined;
  const open = (sequence: number): Promise<Buffer | null> => {
    if (latest?.sequence !== sequence) latest = { sequence, bytes: readChunk(sequelize, key, fileId, sequence) };
    return latest.bytes;
  };
  const parts: Buffer[] = [];
  for (const start of starts) {
    const pieces: Buffer[] = [];
    for (const chunk of chunks.filter((one) => one.start < start + length && one.start + one.length > start)) {
      const bytes = await open(chunk.sequence);
      if (bytes) pieces.push(bytes.subarray(Math.max(0, start - chunk.start), start + length - chunk.start));
    }
    if (pieces.length === 0) await refuseErased(sequelize, { rawFileId: fileId });
    parts.push(Buffer.concat(pieces));
  }
  return parts;
}
