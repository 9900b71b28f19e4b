import type { ProblemDetails, ProblemItem } from '@tallystone/contracts/problems/schema';
import type { Run } from '@tallystone/contracts/runs/schema';
import type { ColumnList } from '@tallystone/contracts/samples/columns';
import type { Preview } from '@tallystone/contracts/samples/reading';
import fc from 'fast-check';
import { expect } from 'vitest';
import { deriveKey } from '../../server/src/config/keys';
import { hashText } from '../../server/src/profiling/personal';
import { patience, readByOracle, wildBytes, wildTables, wildTexts } from '../../server/src/reading/testing/wild-files';
import { openSample } from '../../server/src/storage/columnStore';
import type { IntakeServer, Visitor } from './intake';

/** What a file came to on the way that every file takes: upload, preview, reading, the column store. */
export type Outcome =
  | { readonly refused: readonly ProblemItem[] }
  | { readonly refused: null; readonly header: readonly string[]; readonly rows: readonly (readonly string[])[] };

/** A person and a model of their own for so many files: what one session may ask in a minute is bounded, and the list of samples is asked for each. */
const filesOfModel = 50;

/** Sends files through the whole product, and sees to it that each ends as data or in problems that say what and where, within the time. */
export class CorpusReader {
  private visitor!: Visitor;
  private modelId = '';
  private files = 0;
  private readonly key: Buffer;
  /** By column of the file that was read last. */
  private hashed: readonly boolean[] = [];

  /** @param url where the product serves */
  constructor(
    private readonly server: IntakeServer,
    private readonly url: string,
  ) {
    this.key = deriveKey(server.context.config.keys.identifiers, 'sample columns');
  }

  async read(bytes: Buffer, choices: Record<string, unknown> = {}): Promise<Outcome> {
    if (this.files++ % filesOfModel === 0) {
      this.visitor = await this.server.signInAt(this.url, `reader-${this.files}`, 'modeller');
      this.modelId = await this.visitor.model();
    }
    const began = performance.now();
    const outcome = await this.onItsWay(bytes, choices);
    expect(performance.now() - began).toBeLessThan(patience);
    return outcome;
  }

  private async onItsWay(bytes: Buffer, choices: Record<string, unknown>): Promise<Outcome> {
    const { visitor } = this;
    let answer = await visitor.beginUpload(this.modelId, bytes.length);
    if (answer.status === 201 && bytes.length > 0) answer = await visitor.sendUpload(answer.headers.location, 0, bytes);
    if (answer.status !== 204) return refusedAtOnce(answer, [400, 413, 415, 422]);
    const list = await visitor.get(`/api/models/${this.modelId}/samples`).expect(200);
    const [{ id }] = (list.body as { samples: { id: string }[] }).samples;
    const path = `/api/models/${this.modelId}/samples/${id}`;
    const preview = await visitor.post(`${path}/preview`).send(choices);
    if (preview.status !== 200) return refusedAtOnce(preview, [422]);
    const started = await visitor.post(`${path}/readings`).send((preview.body as Preview).choices);
    if (started.status !== 202) return refusedAtOnce(started, [422]);
    const run = await visitor.ended((started.body as Run).id);
    if (run.state !== 'succeeded') {
      expect(run.problem?.code).toBe('file-refused');
      const { problems } = (await visitor.get(path).expect(200)).body as { problems: ProblemItem[] };
      return { refused: withPlaces(problems) };
    }
    return this.stored(id, path);
  }

  /** Identifiers are kept as keyed hashes and come back as these. */
  private async stored(id: string, path: string): Promise<Outcome> {
    const { columns } = (await this.visitor.get(`${path}/columns`).expect(200)).body as ColumnList;
    const header = columns.map(({ column }) => column);
    const source = await openSample(this.server.context.sequelize, id, header);
    const cells = header.map((name) => {
      const column = source.column(name);
      if (column?.kind !== 'texts') throw new Error('Texts are expected');
      return Array.from(column.codes, (code) => column.texts[code]);
    });
    this.hashed = columns.map(({ hashed }) => hashed);
    return { refused: null, header, rows: Array.from({ length: source.rows }, (_, row) => cells.map((column) => column[row])) };
  }

  /** Rows as they must come back from the store: what identifies people as hashes. */
  asStored(rows: readonly (readonly string[])[], missing: readonly string[] = ['']): string[][] {
    return rows.map((row) =>
      row.map((text, column) => (this.hashed[column] && !missing.includes(text) ? hashText(this.key, text) : text)),
    );
  }
}

function refusedAtOnce({ status, body }: { status: number; body: unknown }, allowed: readonly number[]): Outcome {
  const details = body as ProblemDetails;
  expect(allowed, JSON.stringify(body)).toContain(status);
  expect(details.detail).not.toBe('');
  const listed = details.problems.length > 0 ? details.problems : [{ code: details.code, message: details.detail, where: {} }];
  return { refused: listed };
}

function withPlaces(problems: readonly ProblemItem[]): readonly ProblemItem[] {
  expect(problems.length).toBeGreaterThan(0);
  for (const { code, message, where } of problems) {
    expect(code).not.toBe('');
    expect(message).not.toBe('');
    if (!['no-rows', 'empty'].includes(code)) expect(Object.keys(where), message).not.toEqual([]);
  }
  return problems;
}

const stated = { encoding: 'utf-8', delimiter: ',', trim: false, decimal: '.', thousands: null, missing: [] };

/** Generated tables come back to the letter. */
export async function generatedTables(reader: CorpusReader, runs: number): Promise<void> {
  await fc.assert(
    fc.asyncProperty(wildTables, async ({ bytes, delimiter, end, header, rows }) => {
      // Blank lines below a header are no rows.
      fc.pre(bytes.toString().slice(bytes.indexOf(end)).trim() !== '');
      const outcome = await reader.read(bytes, { ...stated, delimiter });
      if (outcome.refused) throw new Error(`A proper table is refused: ${JSON.stringify(outcome.refused)}`);
      expect(outcome).toMatchObject({ header, rows: reader.asStored(rows) });
    }),
    { numRuns: runs },
  );
}

/** Files of any characters end in problems, or as csv-parse reads them. Returns how many were read. */
export async function generatedTexts(reader: CorpusReader, runs: number): Promise<number> {
  let accepted = 0;
  await fc.assert(
    fc.asyncProperty(wildTexts, fc.boolean(), async (text, trim) => {
      const outcome = await reader.read(Buffer.from(text), { ...stated, trim });
      if (outcome.refused) return;
      accepted++;
      expect(outcome.rows).toEqual(reader.asStored(readByOracle(text, trim)));
    }),
    { numRuns: runs },
  );
  return accepted;
}

/** Files of any bytes, under the choices that the preview proposes. */
export async function generatedBytes(reader: CorpusReader, runs: number): Promise<void> {
  await fc.assert(
    fc.asyncProperty(wildBytes, async (bytes) => {
      const outcome = await reader.read(bytes);
      if (outcome.refused === null) for (const row of outcome.rows) expect(row).toHaveLength(outcome.header.length);
    }),
    { numRuns: runs },
  );
}
