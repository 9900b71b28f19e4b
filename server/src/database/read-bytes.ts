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
    const bytes = await new Promise<Buffer>((resolve, reject) => {
      connection.query(new CopyOut(`COPY (${written}) TO STDOUT (FORMAT binary)`, resolve, reject));
    });
    connectionManager.releaseConnection(connection);
    return fieldsOf(bytes);
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
  private readonly pieces: Buffer[] = [];

  constructor(
    private readonly text: string,
    private readonly resolve: (bytes: Buffer) => void,
    private readonly reject: (cause: unknown) => void,
  ) {}

  submit(connection: Connection): void {
    connection.query(this.text);
  }
  /** The piece lies in a buffer that pg uses again. */
  handleCopyData({ chunk }: { chunk: Buffer }): void {
    this.pieces.push(Buffer.from(chunk));
  }
  handleCommandComplete(): void {
    // What follows is ReadyForQuery.
  }
  handleReadyForQuery(): void {
    this.resolve(this.pieces.length === 1 ? this.pieces[0] : Buffer.concat(this.pieces));
  }
  handleError(cause: unknown): void {
    this.reject(cause);
  }
}

const signature = Buffer.from('PGCOPY\n\xff\r\n\0', 'latin1');

function fieldsOf(bytes: Buffer): Uint8Array<ArrayBuffer>[] {
  if (!bytes.subarray(0, signature.length).equals(signature)) throw new Error('COPY did not answer in its binary form');
  const fields: Uint8Array<ArrayBuffer>[] = [];
  let at = signature.length + 8 + bytes.readInt32BE(signature.length + 4);
  for (;;) {
    const count = bytes.readInt16BE(at);
    if (count === -1) return fields;
    const length = bytes.readInt32BE(at + 2);
    if (count !== 1 || length < 0) throw new Error('readBytes reads one column without nulls');
    at += 6 + length;
    fields.push(new Uint8Array(bytes.subarray(at - length, at)));
  }
}
