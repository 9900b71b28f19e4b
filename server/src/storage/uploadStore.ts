import { createHash, type Hash } from 'node:crypto';
import type { Readable } from 'node:stream';
import { DataStore, Upload } from '@tus/server';
import type { Sequelize, Transaction } from 'sequelize';
import { inTransaction } from '../database/transaction';
import { rows } from '../database/sql';
import { chunkBytes, readChunks, sealChunk, storeChunk } from './rawFiles';

export interface ArrivedFile {
  readonly id: string;
  readonly modelId: string;
  readonly personId: string;
  readonly fileName: string;
  readonly size: number;
  readonly sha256: string;
}

export interface UploadStoreOptions {
  readonly sequelize: Sequelize;
  /** AES-256 key of the raw files. */
  readonly key: Buffer;
  /** Throws when a file that begins (`whole`: consists) of these bytes is not read here; what had arrived of it is then dropped. */
  readonly inspect: (head: Buffer, whole: boolean) => void;
  /** Makes the sample, in the transaction that stores the last chunk: the file is here as a whole, or it is still an upload. */
  readonly complete: (tx: Transaction, file: ArrivedFile) => Promise<void>;
}

/** A failure of the protocol as @tus/server understands it. */
export class UploadFault extends Error {
  constructor(
    readonly status_code: number,
    readonly body: string,
  ) {
    super(body);
    this.name = 'UploadFault';
  }
}

interface Progress {
  readonly size: number;
  readonly received: number;
  readonly fileName: string;
  readonly modelId: string;
  readonly personId: string;
  readonly startedAt: Date;
}

/**
 * Where tus (1.0.0) keeps what arrives: chunks of 8 MiB, compressed and encrypted, in PostgreSQL, each committed together with the new
 * offset. After a kill the offset is that of the last commit. The row of the upload is made by the service that began it.
 */
export class UploadStore extends DataStore {
  /** Fingerprints under way in this process. After a restart, or in another process, the stored chunks are hashed anew. */
  private readonly hashes = new Map<string, { hash: Hash; offset: number }>();

  constructor(private readonly options: UploadStoreOptions) {
    super();
    this.extensions = ['creation', 'termination'];
  }

  override async create(file: Upload): Promise<Upload> {
    return file;
  }

  override async getUpload(id: string): Promise<Upload> {
    const file = await this.find(id);
    return new Upload({
      id,
      size: file.size,
      offset: file.received,
      metadata: { filename: file.fileName },
      creation_date: file.startedAt.toISOString(),
    });
  }

  /**
   * How much of a file has arrived, and the SHA-256 (FIPS 180-4) of these bytes in hex.
   *
   * @throws UploadFault 404 where there is no such upload or it has arrived as a whole
   * @example
   * const { offset, sha256 } = await store.arrived(id); // sha256 of the first `offset` bytes
   */
  async arrived(id: string): Promise<{ offset: number; sha256: string }> {
    const { received, size } = await this.find(id);
    if (received === size) throw new UploadFault(404, 'The upload has arrived');
    const { hash } = await this.fingerprint(id, received);
    return { offset: received, sha256: hash.copy().digest('hex') };
  }

  override async remove(id: string): Promise<void> {
    this.hashes.delete(id);
    await rows(this.options.sequelize, 'DELETE FROM raw_files WHERE id = $1 AND completed_at IS NULL RETURNING id', [id]);
  }

  override async write(stream: Readable, id: string, offset: number): Promise<number> {
    const file = await this.find(id);
    const fingerprint = await this.fingerprint(id, offset);
    const [{ next }] = await rows<{ next: number }>(
      this.options.sequelize,
      'SELECT coalesce(max(sequence) + 1, 0)::int AS next FROM raw_chunks WHERE file_id = $1',
      [id],
    );
    let sequence = next;
    let at = offset;
    let pieces: Buffer[] = [];
    let waiting = 0;
    let broken: Error | null = null;

    const flush = async (): Promise<void> => {
      const bytes = Buffer.concat(pieces, waiting);
      pieces = [];
      waiting = 0;
      if (at === 0) await this.inspect(id, bytes, bytes.length === file.size);
      await this.storeNext(id, file, { sequence, start: at, bytes, hash: fingerprint.hash });
      fingerprint.hash.update(bytes);
      sequence++;
      at += bytes.length;
      fingerprint.offset = at;
    };

    try {
      for await (const piece of stream as AsyncIterable<Buffer>) {
        for (let from = 0; from < piece.length;) {
          const part = piece.subarray(from, from + chunkBytes - waiting);
          pieces.push(part);
          waiting += part.length;
          from += part.length;
          if (waiting === chunkBytes) await flush();
        }
      }
    } catch (cause) {
      if (cause instanceof UploadFault || waiting === 0) throw cause;
      broken = cause instanceof Error ? cause : new Error(String(cause));
    }
    // What has arrived is kept when the connection breaks: it need not be sent again.
    if (waiting > 0) await flush();
    if (broken !== null) throw broken;
    if (at === file.size) this.hashes.delete(id);
    return at;
  }

  private async inspect(id: string, head: Buffer, whole: boolean): Promise<void> {
    try {
      this.options.inspect(head, whole);
    } catch (cause) {
      await this.remove(id);
      throw cause;
    }
  }

  private async storeNext(
    id: string,
    file: Progress,
    chunk: { sequence: number; start: number; bytes: Buffer; hash: Hash },
  ): Promise<void> {
    const { sequelize, key } = this.options;
    const { sequence, start, bytes } = chunk;
    const content = await sealChunk(key, id, sequence, bytes);
    const end = start + bytes.length;
    await inTransaction(sequelize, async (tx) => {
      const moved = await rows(
        sequelize,
        `UPDATE raw_files SET received = $3, seen_at = now() WHERE id = $1 AND received = $2 AND completed_at IS NULL RETURNING id`,
        [id, start, end],
        tx,
      );
      // Another connection, perhaps of another process, has stored these bytes meanwhile.
      if (moved.length === 0) throw new UploadFault(409, 'Upload-Offset conflict');
      await storeChunk(sequelize, tx, { fileId: id, sequence, start, length: bytes.length, content });
      if (end < file.size) return;
      const sha256 = chunk.hash.copy().update(bytes).digest('hex');
      await rows(
        sequelize,
        'UPDATE raw_files SET sha256 = $2, completed_at = now() WHERE id = $1 RETURNING id',
        [id, sha256],
        tx,
      );
      await this.options.complete(tx, {
        id,
        modelId: file.modelId,
        personId: file.personId,
        fileName: file.fileName,
        size: file.size,
        sha256,
      });
    });
  }

  private async fingerprint(id: string, offset: number): Promise<{ hash: Hash; offset: number }> {
    const known = this.hashes.get(id);
    if (known?.offset === offset) return known;
    const fresh = { hash: createHash('sha256'), offset: 0 };
    for await (const bytes of readChunks(this.options.sequelize, this.options.key, id)) {
      fresh.hash.update(bytes);
      fresh.offset += bytes.length;
    }
    if (fresh.offset !== offset) throw new UploadFault(409, 'Upload-Offset conflict');
    this.hashes.set(id, fresh);
    // Uploads that were left lying would otherwise stay here for good.
    if (this.hashes.size > 200) this.hashes.delete(this.hashes.keys().next().value ?? id);
    return fresh;
  }

  private async find(id: string): Promise<Progress> {
    const [file] = await rows<Omit<Progress, 'size' | 'received'> & { size: string; received: string }>(
      this.options.sequelize,
      `SELECT size, received, file_name AS "fileName", model_id AS "modelId", person_id AS "personId", started_at AS "startedAt"
         FROM raw_files WHERE id = $1`,
      [id],
    );
    if (!file) throw new UploadFault(404, 'The upload is not there');
    return { ...file, size: Number(file.size), received: Number(file.received) };
  }
}
