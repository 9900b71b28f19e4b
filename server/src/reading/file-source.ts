import { createReadStream } from 'node:fs';
import type { Specification } from '@tallystone/contracts/specification/types';
import { columnsRead } from '../replay/replay';
import type { ColumnSource } from '../replay/source';
import { readColumns } from './columns';
import { ReadingError, type ReadFile, type ReadingOptions } from './types';

/** The columns of a file in memory as a source for the chain. */
export function sourceOfFile(file: ReadFile): ColumnSource {
  const byName = new Map(file.columns.map((column) => [column.name, column]));
  return { rows: file.rows, column: (name) => byName.get(name) };
}

/**
 * Reads what a specification needs from a raw file, as the specification says it is written.
 * @param bytes a path, or the bytes as a stream
 * @throws ReadingError with every problem of the file
 * @example const { source, sha256 } = await readForReplay('sample.csv', specification);
 */
export async function readForReplay(
  bytes: string | AsyncIterable<Buffer | Uint8Array>,
  specification: Specification,
  options: Pick<ReadingOptions, 'onProgress' | 'signal'> = {},
): Promise<{ source: ColumnSource; sha256: string; rows: number }> {
  const { encoding, delimiter, trim, decimal, thousands, dateOrder, dateTimes, notDates, missing } = specification.data;
  const { all, numbersOnly } = columnsRead(specification);
  const stream =
    typeof bytes === 'string' ? (createReadStream(bytes, { highWaterMark: 1 << 20 }) as AsyncIterable<Buffer>) : bytes;
  const file = await readColumns(
    stream,
    { encoding, delimiter, trim, dateOrder, dateTimes, notDates, missing },
    {
      ...options,
      keepLost: true,
      mostRows: Number.MAX_SAFE_INTEGER,
      mostColumns: 100_000,
      columns: all,
      numbers: { columns: numbersOnly, format: { decimal, thousands } },
    },
  );
  if (file.problems.length > 0) throw new ReadingError(file.problems);
  return { source: sourceOfFile(file), sha256: file.sha256, rows: file.rows };
}
