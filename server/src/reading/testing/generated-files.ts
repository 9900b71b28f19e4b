import fc from 'fast-check';
import { expect, it } from 'vitest';
import { type ReadFile, readColumns } from '../index';
import { patience, readByOracle, wildBytes, wildTables, wildTexts } from './wild-files';

export async function* inPieces(bytes: Buffer, size: number): AsyncGenerator<Buffer> {
  for (let from = 0; from < bytes.length; from += size) yield Promise.resolve(bytes.subarray(from, from + size));
}

export function readBytes(bytes: Buffer, options: { trim?: boolean; delimiter?: string; size?: number } = {}): Promise<ReadFile> {
  const choices = { encoding: 'utf-8' as const, delimiter: options.delimiter ?? ',', trim: options.trim ?? false };
  return readColumns(inPieces(bytes, options.size ?? 4096), choices);
}

export function rowsOf(file: ReadFile): string[][] {
  return Array.from({ length: file.rows }, (_, row) =>
    file.columns.map((column) => (column.kind === 'texts' ? column.texts[column.codes[row]] : String(column.values[row]))),
  );
}

/**
 * Tests of generated files, `runs` of each kind: every one ends in typed problems with a place, or in an exact round trip, and none hangs.
 * csv-parse is the oracle.
 */
export function testGeneratedFiles(runs: number): void {
  const readTimed: typeof readBytes = async (bytes, options) => {
    const began = performance.now();
    const file = await readBytes(bytes, options);
    expect(performance.now() - began).toBeLessThan(patience);
    return file;
  };

  it('round trip at any chunk size, delimiter and line end', async () => {
    await fc.assert(
      fc.asyncProperty(wildTables, fc.integer({ min: 1, max: 50 }), async ({ bytes, delimiter, rows }, size) => {
        const file = await readTimed(bytes, { delimiter, size });
        expect(file.problems).toEqual([]);
        expect(rowsOf(file)).toEqual(rows);
      }),
      { numRuns: runs },
    );
  });

  it('of any characters end in typed problems or agree with csv-parse', async () => {
    let accepted = 0;
    await fc.assert(
      fc.asyncProperty(wildTexts, fc.integer({ min: 1, max: 20 }), fc.boolean(), async (text, size, trim) => {
        const file = await readTimed(Buffer.from(text), { size, trim });
        for (const problem of file.problems) {
          expect(problem.code).not.toBe('');
          expect(problem.where.line ?? problem.where.count ?? 0).toBeGreaterThanOrEqual(0);
        }
        if (file.problems.length > 0) return;
        accepted++;
        expect(rowsOf(file)).toEqual(readByOracle(text, trim));
      }),
      { numRuns: runs },
    );
    // One in six is, in the long run.
    expect(accepted).toBeGreaterThan(runs / 20);
  });

  it('of any bytes end in typed problems or data', async () => {
    await fc.assert(
      fc.asyncProperty(wildBytes, fc.integer({ min: 1, max: 20 }), async (bytes, size) => {
        const file = await readTimed(bytes, { size });
        if (file.problems.length === 0) expect(file.columns).toHaveLength(file.header.length);
        else expect(file.columns).toEqual([]);
      }),
      { numRuns: runs },
    );
  });
}
