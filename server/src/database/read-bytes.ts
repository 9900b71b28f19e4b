import type { Client, Connection, Submittable } from 'pg';
import type { Sequelize } from 'sequelize';

/**
 * Large byte strings as they are. As rows of a query they would come in hexadecimal and be made a text of twice the length first: most of the time
 * of reading a large file went there. COPY in its binary form (PostgreSQL manual, COPY, "Binary Format") sends the bytes.
 */

const uuid = /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/;

/** A `SELECT` of one column of type bytea; parameters are uuids and whole numbers, and nothing else: COPY takes none of its own. */
export interface BytesQuery {
  readonly text: string;
  readonly values: readonly (string | number)[];
}

/**
 * @returns the bytes of each row, each in memory of its own
 * @throws the database's error, with its SQLSTATE as `code`
 * @example
 * await readBytes(sequelize, { text: 'SELECT content FROM raw_chunks WHERE file_id = $1 ORDER BY sequence', values: [id] });
 */
export async function readBytes(sequelize: Sequelize, { text, values }: BytesQuery): Promise<Uint8Array<ArrayBuffer>[]> {
  const written = text.replace(/\$(\d+)/g, (_, number: string) => literal(values[Number(number) - 1]));
  const { connectionManager } = sequelize;
  const connection = (await connectionManager.getConnection({ type: 'read' })) as Client;
  try {
    const pieces = await new Promise<Uint8Array<ArrayBuffer>[]>((resolve, reject) => {
      connection.query(new CopyOut(`COPY (${written}) TO STDOUT (FORMAT binary)`, resolve, reject));
    });
    connectionManager.releaseConnection(connection);
    return fieldsOf(pieces);
  } catch (cause) {
    await connectionManager.destroyConnection(connection).catch(() => undefined);
    throw cause;
  }
}

function literal(value: string | number): string {
  if (typeof value === 'number' && Number.isSafeInteger(value)) return String(value);
  if (typeof value === 'string' && uuid.test(value)) return `'${value}'::uuid`;
  throw new Error('A parameter of readBytes is a uuid or a whole number');
}

/** A query in the form that pg takes from elsewhere: it gathers what COPY sends. */
class CopyOut implements Submittable {
  private readonly pieces: Uint8Array<ArrayBuffer>[] = [];

  constructor(
    private readonly text: string,
    private readonly resolve: (pieces: Uint8Array<ArrayBuffer>[]) => void,
    private readonly reject: (cause: unknown) => void,
  ) {}

  submit(connection: Connection): void {
    connection.query(this.text);
  }
  /** The piece lies in a buffer that pg uses again, and that holds more than it. */
  handleCopyData({ chunk }: { chunk: Buffer }): void {
    this.pieces.push(new Uint8Array(chunk));
  }
  handleCommandComplete(): void {
    // What follows is ReadyForQuery.
  }
  handleReadyForQuery(): void {
    this.resolve(this.pieces);
  }
  handleError(cause: unknown): void {
    this.reject(cause);
  }
}

const signature = Buffer.from('PGCOPY\n\xff\r\n\0', 'latin1');

/**
 * The fields of rows that lie anyhow in the pieces. PostgreSQL sends a piece for each row: its field is then a view on the piece, and nothing is copied;
 * a field that shares a piece with another, or lies in two, is.
 */
function fieldsOf(pieces: readonly Uint8Array<ArrayBuffer>[]): Uint8Array<ArrayBuffer>[] {
  const fields: Uint8Array<ArrayBuffer>[] = [];
  let next = 0;
  let piece = new Uint8Array(0);
  let view = new DataView(piece.buffer);
  let at = 0;
  /** Lets the next bytes lie in one piece. */
  const need = (count: number): void => {
    while (piece.length - at < count) {
      if (next === pieces.length) throw new Error('COPY ended before its end');
      const rest = piece.subarray(at);
      piece = rest.length === 0 ? pieces[next] : joined(rest, pieces[next]);
      view = new DataView(piece.buffer, piece.byteOffset, piece.byteLength);
      next++;
      at = 0;
    }
  };
  need(signature.length + 8);
  if (!signature.equals(piece.subarray(0, signature.length))) throw new Error('COPY did not answer in its binary form');
  const extension = view.getInt32(signature.length + 4);
  need(signature.length + 8 + extension);
  at = signature.length + 8 + extension;
  for (;;) {
    need(2);
    const count = view.getInt16(at);
    if (count === -1) return fields;
    need(6);
    const length = view.getInt32(at + 2);
    if (count !== 1 || length < 0) throw new Error('readBytes reads one column without nulls');
    at += 6;
    need(length);
    const field = piece.subarray(at, at + length);
    at += length;
    // No other field is a view on this piece: one that ends it has none after it, and those before it are copies.
    fields.push(at === piece.length && length > 0 ? field : field.slice());
  }
}

function joined(one: Uint8Array, two: Uint8Array): Uint8Array<ArrayBuffer> {
  const both = new Uint8Array(one.length + two.length);
  both.set(one);
  both.set(two, one.length);
  return both;
}
