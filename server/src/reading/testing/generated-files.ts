import { stringify } from 'csv-stringify/sync';
import { parse } from 'csv-parse/sync';
import fc from 'fast-check';
import { expect, it } from 'vitest';
import { type ReadFile, readColumns } from '../index';

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

/** Longest that a small file may take: a hang is a failure, a busy machine is not. */
const PATIENCE_MS = 5000;

/**
 * Tests of generated files, `runs` of each kind: every one ends in typed problems with a place, or in an exact round trip, and none hangs.
 * csv-parse is the oracle.
 */
export function testGeneratedFiles(runs: number): void {
  const readTimed: typeof readBytes = async (bytes, options) => {
    const began = performance.now();
    const file = await readBytes(bytes, options);
    expect(performance.now() - began).toBeLessThan(PATIENCE_MS);
    return file;
  };

  const cell = fc.oneof(
    fc.string({ unit: 'grapheme', maxLength: 12 }),
    fc.constantFrom('', ' ', '"', '""', ',', '\n', '\r\n', '\r', '\t', ' a ', '1e309', '-', "'"),
  );
  const table = fc
    .integer({ min: 1, max: 5 })
    .chain((width) => fc.array(fc.array(cell, { minLength: width, maxLength: width }), { minLength: 1, maxLength: 12 }));

  it('round trip at any chunk size, delimiter and line end', async () => {
    await fc.assert(
      fc.asyncProperty(
        table,
        fc.integer({ min: 1, max: 50 }),
        fc.constantFrom(',', ';', '\t', '|'),
        fc.constantFrom('\n', '\r\n', '\r'),
        async (rows, size, delimiter, end) => {
          const clean = rows.map((row) => row.map((text) => text.replaceAll(/[\0\ufffd]/g, '')));
          const header = clean[0].map((_, index) => `c${index}`);
          const bytes = Buffer.from(stringify([header, ...clean], { delimiter, record_delimiter: end, quoted: true }));
          const file = await readTimed(bytes, { delimiter, size });
          expect(file.problems).toEqual([]);
          expect(rowsOf(file)).toEqual(clean);
        },
      ),
      { numRuns: runs },
    );
  });

  it('of any characters end in typed problems or agree with csv-parse', async () => {
    const wild = fc
      .array(fc.constantFrom('a', '1', ' ', ',', '"', '\n', '\r\n', '\r', 'é', '\0', '\t'), { maxLength: 60 })
      .map((parts) => parts.join(''));
    let accepted = 0;
    await fc.assert(
      fc.asyncProperty(wild, fc.integer({ min: 1, max: 20 }), fc.boolean(), async (text, size, trim) => {
        const file = await readTimed(Buffer.from(`x,y\n${text}`), { size, trim });
        for (const problem of file.problems) {
          expect(problem.code).not.toBe('');
          expect(problem.where.line ?? problem.where.count ?? 0).toBeGreaterThanOrEqual(0);
        }
        if (file.problems.length > 0) return;
        accepted++;
        const oracle: string[][] = parse(`x,y\n${text}`, {
          trim,
          record_delimiter: ['\r\n', '\n', '\r'],
          relax_column_count: true,
          relax_quotes: true,
          skip_empty_lines: false,
        });
        while (oracle.length > 0 && oracle[oracle.length - 1].length === 1 && oracle[oracle.length - 1][0] === '') oracle.pop();
        expect(rowsOf(file)).toEqual(oracle.slice(1));
      }),
      { numRuns: runs },
    );
    expect(accepted).toBeGreaterThan(5);
  });

  it('of any bytes end in typed problems or data', async () => {
    await fc.assert(
      fc.asyncProperty(fc.uint8Array({ maxLength: 200 }), fc.integer({ min: 1, max: 20 }), async (bytes, size) => {
        const file = await readTimed(Buffer.from(bytes), { size });
        if (file.problems.length === 0) expect(file.columns).toHaveLength(file.header.length);
        else expect(file.columns).toEqual([]);
      }),
      { numRuns: runs },
    );
  });
}
