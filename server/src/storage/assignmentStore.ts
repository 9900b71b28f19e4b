import { deflateRawSync, inflateRawSync } from 'node:zlib';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../database/sql';
import { segmentRows } from './columnStore';
import { refuseErased } from './erasure';

/** What a confirmed definition says of each row. */
export interface Assignment {
  readonly partition: Uint8Array;
  readonly outcome: Uint8Array;
  readonly exclusion: Uint16Array;
  readonly weights: Float64Array | null;
}

type Kept = Uint8Array | Uint16Array | Float64Array;

/** Stores the assignment in segments beside the columns; little-endian, raw deflate (RFC 1951). */
export async function storeAssignment(
  sequelize: Sequelize,
  tx: Transaction,
  definitionId: string,
  assignment: Assignment,
): Promise<void> {
  const kept: [string, Kept | null][] = [
    ['partition', assignment.partition],
    ['outcome', assignment.outcome],
    ['exclusion', assignment.exclusion],
    ['weight', assignment.weights],
  ];
  for (const [what, values] of kept) {
    if (values === null) continue;
    for (let segment = 0; segment * segmentRows < values.length; segment++) {
      const part = values.subarray(segment * segmentRows, (segment + 1) * segmentRows);
      const content = deflateRawSync(Buffer.from(part.buffer, part.byteOffset, part.byteLength), { level: 4 });
      await sequelize.query(
        'INSERT INTO definition_segments (definition_id, what, segment, rows, content) VALUES ($1, $2, $3, $4, $5)',
        {
          bind: [definitionId, what, segment, part.length, content],
          transaction: tx,
        },
      );
    }
  }
}

/** @throws Problem 409 where the rows of its sample were erased */
export async function readAssignment(sequelize: Sequelize, definitionId: string, count: number): Promise<Assignment> {
  const partition = new Uint8Array(count);
  const outcome = new Uint8Array(count);
  const exclusion = new Uint16Array(count);
  let weights: Float64Array | null = null;
  const filled = { partition: 0, outcome: 0, exclusion: 0, weight: 0 };
  const stored = await rows<{ what: keyof typeof filled; segment: number; rows: number; content: Buffer }>(
    sequelize,
    'SELECT what, segment, rows, content FROM definition_segments WHERE definition_id = $1',
    [definitionId],
  );
  for (const { what, segment, rows: length, content } of stored) {
    const bytes = inflateRawSync(content);
    // A copy of its own: a typed array needs an aligned start.
    const buffer = bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.byteLength);
    const at = segment * segmentRows;
    if (what === 'partition') partition.set(new Uint8Array(buffer), at);
    else if (what === 'outcome') outcome.set(new Uint8Array(buffer), at);
    else if (what === 'exclusion') exclusion.set(new Uint16Array(buffer), at);
    else (weights ??= new Float64Array(count)).set(new Float64Array(buffer), at);
    filled[what] += length;
  }
  const whole =
    filled.partition === count &&
    filled.outcome === count &&
    filled.exclusion === count &&
    (weights === null || filled.weight === count);
  if (!whole) {
    await refuseErased(sequelize, { definitionId });
    throw new Error(`The rows of definition ${definitionId} are not stored as a whole`);
  }
  return { partition, outcome, exclusion, weights };
}
