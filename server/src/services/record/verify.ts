import type { RecordHead, RecordVerification } from '@tallystone/contracts/record/schema';
import type { Pool, PoolClient } from 'pg';
import { type Link, chainStart, hashLink } from './chain';

export interface VerifyOptions {
  readonly signal?: AbortSignal;
  readonly onProgress?: (share: number) => void;
  /** Heads noted elsewhere (in a document, in the log): the chain must still contain each, or its tail was cut and grown anew. */
  readonly heads?: readonly RecordHead[];
  readonly batch?: number;
}

type Row = Link & { readonly previousHash: string; readonly hash: string };

const listed = 100;

/**
 * Walks the whole record and holds every link against its hash and its neighbour: finds rows that were altered, dropped or put into another
 * order. A tail that was cut off clean shows only against a head noted elsewhere; give those in `heads`.
 *
 * Streams in batches of 5,000 within one snapshot; memory does not grow with the record.
 */
export async function verifyChain(pool: Pool, options: VerifyOptions = {}): Promise<RecordVerification> {
  const client = await pool.connect();
  try {
    await client.query('BEGIN ISOLATION LEVEL REPEATABLE READ READ ONLY');
    return await walk(client, options);
  } finally {
    await client.query('ROLLBACK').catch(() => undefined);
    client.release();
  }
}

async function walk(client: PoolClient, options: VerifyOptions): Promise<RecordVerification> {
  const total = Number((await client.query<{ count: string }>('SELECT count(*) FROM record')).rows[0].count);
  const faults: RecordVerification['faults'] = [];
  let faultCount = 0;
  const report = (sequence: number, kind: RecordVerification['faults'][number]['kind'], message: string): void => {
    faultCount++;
    if (faults.length < listed) faults.push({ sequence, kind, message });
  };
  const heads = new Map((options.heads ?? []).map((head) => [head.sequence, head.hash]));
  let previous = { sequence: 0, hash: chainStart };
  let seen = 0;

  for (;;) {
    options.signal?.throwIfAborted();
    const batch = await read(client, previous.sequence, options.batch ?? 5000);
    if (batch.length === 0) break;
    for (const row of batch) {
      if (row.sequence !== previous.sequence + 1) {
        const from = previous.sequence + 1;
        const to = row.sequence - 1;
        report(from, 'dropped', from === to ? `Entry ${from} is missing` : `Entries ${from} to ${to} are missing`);
      } else if (row.previousHash !== previous.hash) {
        report(row.sequence, 'reordered', `Entry ${row.sequence} does not follow entry ${previous.sequence}`);
      }
      if (hashLink(row.previousHash, row) !== row.hash)
        report(row.sequence, 'altered', `Entry ${row.sequence} does not match its hash`);
      const noted = heads.get(row.sequence);
      if (noted !== undefined && noted !== row.hash)
        report(row.sequence, 'altered', `Entry ${row.sequence} is not the one that was noted`);
      heads.delete(row.sequence);
      previous = { sequence: row.sequence, hash: row.hash };
    }
    seen += batch.length;
    options.onProgress?.(total === 0 ? 1 : Math.min(1, seen / total));
  }
  for (const sequence of heads.keys()) report(sequence, 'cut', `Entry ${sequence} was noted and is no longer there`);
  return { rows: seen, intact: faultCount === 0, faultCount, faults, head: previous };
}

async function read(client: PoolClient, after: number, limit: number): Promise<Row[]> {
  const { rows } = await client.query<Omit<Row, 'sequence' | 'at'> & { sequence: string; at: Date }>({
    name: 'verify-record',
    text: `SELECT sequence, at, actor_id AS "actorId", actor_name AS "actorName", actor_roles AS "actorRoles", action, entity, entity_id AS "entityId",
             model_id AS "modelId", before, after, detail, reason, previous_hash AS "previousHash", hash
           FROM record WHERE sequence > $1 ORDER BY sequence LIMIT $2`,
    values: [after, limit],
  });
  return rows.map((row) => ({ ...row, sequence: Number(row.sequence), at: row.at.toISOString() }));
}

/** The last link; sequence 0 and 64 zeros while the record is empty. */
export async function recordHead(pool: Pool): Promise<RecordHead> {
  const { rows } = await pool.query<{ sequence: string; hash: string }>(
    'SELECT sequence, hash FROM record ORDER BY sequence DESC LIMIT 1',
  );
  return rows.length > 0 ? { sequence: Number(rows[0].sequence), hash: rows[0].hash } : { sequence: 0, hash: chainStart };
}
