import { FitSettings } from '@tallystone/contracts/fits/schema';
import type { ColumnProfile, ColumnRole } from '@tallystone/contracts/samples/columns';
import type { DraftContent } from '@tallystone/contracts/samples/definition';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { deriveKey } from '../../server/src/config/keys';
import { hashText } from '../../server/src/profiling/personal';
import { prepare } from '../../server/src/replay/prepare';
import { buildSpecification } from '../../server/src/services/specifications/build-specification';
import { loadPrepared } from '../../server/src/services/samples/definitions';
import { openSample } from '../../server/src/storage/columnStore';
import { inflateSegment } from '../../server/src/storage/segmentCoding';
import { readColumns, sourceOfFile } from '../../server/src/reading/index';
import { IntakeServer, type Visitor } from '../support/intake';

/** A column of which nothing but a person can say that it identifies applicants. */
let server: IntakeServer;
let modeller: Visitor;
let modelId: string;

beforeAll(async () => {
  server = await IntakeServer.start();
  modeller = await server.signIn('marian', 'modeller');
  modelId = await modeller.model();
});
afterAll(() => server.stop());

const rowCount = 600;
/** Members have two applications each, and the heading says nothing. */
const member = (row: number): string => `MARSH-${String(4000 + Math.floor(row / 2) * 7)}`;
/** Short whole numbers: an amount, as far as values can tell. */
const folder = (row: number): string => String(20_000 + row * 3);
function applicants(): string {
  const lines = ['member,folder,income,home,bad'];
  for (let row = 0; row < rowCount; row++)
    lines.push(
      [
        member(row),
        row % 50 === 0 ? '' : folder(row),
        900 + ((row * 37) % 5000),
        row % 3 ? 'rent' : 'owner',
        row % 9 === 0 ? 1 : 0,
      ].join(','),
    );
  return `${lines.join('\n')}\n`;
}

async function* inOnePiece(text: string): AsyncGenerator<Buffer> {
  yield Buffer.from(text);
}

const columnsAs = (content: DraftContent, roles: Record<string, ColumnRole>): DraftContent => ({
  ...content,
  columns: content.columns.map((column) => ({ ...column, role: roles[column.column] ?? column.role })),
});

async function confirm(path: string, change: (content: DraftContent) => DraftContent) {
  const { body, headers } = await modeller.get(`${path}/draft`).expect(200);
  const saved = await modeller
    .put(`${path}/draft`)
    .set('If-Match', headers.etag)
    .send(change(body.content as DraftContent))
    .expect(200);
  return modeller.post(`${path}/definitions`).send({ revision: saved.body.revision as number });
}

/** Every byte that the column store has of a sample, inflated, and its profiles as they are stored. */
async function stored(sampleId: string): Promise<string> {
  const [segments] = await server.context.sequelize.query(
    `SELECT c.content FROM column_segments c JOIN sample_readings r ON r.id = c.reading_id WHERE r.sample_id = '${sampleId}'`,
  );
  const [profiles] = await server.context.sequelize.query(
    `SELECT c.profile FROM sample_columns c JOIN sample_readings r ON r.id = c.reading_id WHERE r.sample_id = '${sampleId}'`,
  );
  const inflated = (segments as { content: Buffer }[]).map(({ content }) => inflateSegment(content).toString('latin1'));
  return [...inflated, JSON.stringify(profiles)].join('\n');
}

async function profileOf(path: string, column: string): Promise<ColumnProfile> {
  const { body } = await modeller.get(`${path}/columns`).expect(200);
  const found = (body.columns as ColumnProfile[]).find((one) => one.column === column);
  if (!found) throw new Error(`No column ${column}`);
  return found;
}

describe('a column that a person says is an identifier', () => {
  it('is searched for near-duplicates when it is hashed', async () => {
    const written = (row: number): string => (row === 31 ? 'marsh 4105' : row === 33 ? 'MARSH0004112' : member(row));
    const lines = Array.from({ length: rowCount }, (_, row) => `${written(row)},${(row * 37) % 5000},${row % 9 === 0 ? 1 : 0}`);
    const { path } = await modeller.sample(modelId, `member,income,bad\n${lines.join('\n')}\n`);
    const started = await confirm(path, (content) => columnsAs(content, { member: 'identifier' }));
    expect(await modeller.ended(started.body.id as string)).toMatchObject({ state: 'succeeded' });
    const { hashed, flags } = await profileOf(path, 'member');
    expect(hashed).toBe(true);
    const finding = flags.find(({ code }) => code === 'near-duplicate-identifiers')?.finding;
    expect(finding).toContain('2 identifiers differ from others only in how they are written');
  });

  it('is kept as keyed hashes from the confirmation on, and shown nowhere', async () => {
    const { path, id } = await modeller.sample(modelId, applicants());
    const before = await profileOf(path, 'member');
    expect(before).toMatchObject({ hashed: false, distinct: 300, text: { shortest: 10, longest: 10 } });
    expect(before.mostFrequent).not.toEqual([]);
    expect((await profileOf(path, 'folder')).numeric).not.toBeNull();
    // What is looked for afterwards is there now.
    expect(await stored(id)).toContain('MARSH-');

    const started = await confirm(path, (content) => columnsAs(content, { member: 'identifier', folder: 'identifier' }));
    expect(started.status).toBe(202);
    const run = await modeller.ended(started.body.id as string);
    expect(run).toMatchObject({ state: 'succeeded' });

    const text = await stored(id);
    expect(text).not.toContain('MARSH');
    const source = await openSample(server.context.sequelize, id, ['member', 'folder', 'income']);
    const key = deriveKey(server.context.config.keys.identifiers, 'sample columns');
    const cellsOf = (name: string): string[] => {
      const column = source.column(name);
      if (column?.kind !== 'texts') throw new Error('Texts are expected');
      return Array.from(column.codes, (code) => column.texts[code]);
    };
    // As if they had been read so; a missing value stays missing.
    const all = Array.from({ length: rowCount }, (_, row) => row);
    expect(cellsOf('member')).toEqual(all.map((row) => hashText(key, member(row))));
    expect(cellsOf('folder')).toEqual(all.map((row) => (row % 50 === 0 ? '' : hashText(key, folder(row)))));
    expect(cellsOf('income')[1]).toBe('937');

    const after = await profileOf(path, 'member');
    expect(after).toMatchObject({
      hashed: true,
      kind: 'categorical',
      distinct: 300,
      missing: 0,
      mostFrequent: [],
      valuesComplete: false,
      numeric: null,
      text: { shortest: 10, longest: 10 },
    });
    expect(after.flags.map(({ code }) => code)).toContain('looks-like-identifier');
    expect(await profileOf(path, 'folder')).toMatchObject({
      hashed: true,
      distinct: 588,
      missing: 12,
      numeric: null,
      specialSuspects: [],
      mostFrequent: [],
    });

    // The definition, its report, the preview: nothing shows a cell of them.
    const { definitionId } = run.result as { definitionId: string };
    for (let wait = 0; wait < 200 && (await modeller.get(`${path}/quality`)).body.report === null; wait++)
      await new Promise((resolve) => setTimeout(resolve, 50));
    const { body: quality } = await modeller.get(`${path}/quality`).expect(200);
    expect(quality.report).not.toBeNull();
    const shown = [quality, (await modeller.get(`${path}/quality/column?column=folder`)).body];
    for (const tail of ['/columns', '/draft', `/definitions/${definitionId}`])
      shown.push((await modeller.get(path + tail).expect(200)).body);
    expect(JSON.stringify(shown)).not.toMatch(/MARSH|\b2\d{4}\b/);
    await modeller.post(`${path}/preview`).send({}).expect(403);

    // The record says which, and the same definition comes from the file itself.
    const [events] = await server.context.sequelize.query(
      `SELECT after FROM record WHERE action = 'sample.defined' AND entity_id = '${id}'`,
    );
    expect(events).toMatchObject([{ after: { hashed: ['member', 'folder'] } }]);
    const { body: definition } = await modeller.get(`${path}/definitions/${definitionId}`).expect(200);
    const limits = { mostRows: 10_000, mostColumns: 10 };
    const file = await readColumns(inOnePiece(applicants()), definition.content.data, limits);
    const fromFile = prepare(definition.content, sourceOfFile(file));
    const kept = await loadPrepared(server.context.sequelize, definitionId);
    expect(kept.counts).toEqual(fromFile.counts);
    expect(Buffer.from(kept.partition).equals(Buffer.from(fromFile.partition))).toBe(true);
    expect(Buffer.from(kept.outcome).equals(Buffer.from(fromFile.outcome))).toBe(true);

    // A second definition finds them hashed: they cannot become anything else, and confirming it again changes nothing.
    const other = await confirm(path, (content) => columnsAs(content, { member: 'characteristic' }));
    expect(other.status).toBe(422);
    expect(other.body.problems).toMatchObject([{ code: 'kept-as-hashes', where: { column: 'member' } }]);
    const again = await confirm(path, (content) => columnsAs(content, { member: 'identifier' }));
    expect(await modeller.ended(again.body.id as string)).toMatchObject({ state: 'succeeded', result: { number: 2 } });
    expect(cellsOf('member')[5]).toBe(hashText(key, member(5)));
  }, 120_000);

  it('stays in clear where an earlier definition reads it, which is said', async () => {
    const { path, id } = await modeller.sample(modelId, applicants());
    const first = await confirm(path, (content) => columnsAs(content, { member: 'not used', folder: 'characteristic' }));
    expect(await modeller.ended(first.body.id as string)).toMatchObject({ state: 'succeeded' });
    const second = await confirm(path, (content) => columnsAs(content, { folder: 'identifier' }));
    expect(second.status).toBe(422);
    expect(second.body.problems).toMatchObject([
      {
        code: 'needed-in-clear',
        message: expect.stringContaining('folder cannot become an identifier: definition 1 of this sample reads its values'),
        where: { section: 'columns', column: 'folder' },
      },
    ]);
    // One that no definition has read can.
    const third = await confirm(path, (content) => columnsAs(content, { folder: 'characteristic', member: 'identifier' }));
    expect(await modeller.ended(third.body.id as string)).toMatchObject({ state: 'succeeded', result: { number: 2 } });
    expect(await stored(id)).not.toContain('MARSH');
    expect((await profileOf(path, 'folder')).hashed).toBe(false);
  });

  it('keeps the rows of an applicant together, in hold-out and in folds, where reading has hashed it', async () => {
    // Nearly all come once: reading takes it for what it is.
    const customer = (row: number): string => `C-${10_000 + (row % 20 === 7 ? row - 7 : row)}`;
    const lines = Array.from({ length: rowCount }, (_, row) => `${customer(row)},${(row * 37) % 5000},${row % 9 === 0 ? 1 : 0}`);
    const text = `customer_id,income,bad\n${lines.join('\n')}\n`;
    const { path } = await modeller.sample(modelId, text);
    expect(await profileOf(path, 'customer_id')).toMatchObject({ hashed: true, distinct: 570 });
    const started = await confirm(path, (content) => ({
      ...columnsAs(content, { customer_id: 'group key' }),
      partition: { by: 'seed', seed: 11, holdOutShare: 0.3, outOfTime: null },
    }));
    const run = await modeller.ended(started.body.id as string);
    expect(run).toMatchObject({ state: 'succeeded' });
    const { definitionId } = run.result as { definitionId: string };
    const { body: definition } = await modeller.get(`${path}/definitions/${definitionId}`).expect(200);
    expect(definition.content.partition).toMatchObject({ groups: 'customer_id', groupsBy: 'first-row' });
    const kept = await loadPrepared(server.context.sequelize, definitionId);
    for (let row = 7; row < rowCount; row += 20) expect(kept.partition[row]).toBe(kept.partition[row - 7]);
    expect(new Set(kept.partition).size).toBe(2);

    // The specification of a fit says it of its folds; from the file itself come the same partition and the same folds as from the hashes.
    const specification = buildSpecification({
      title: 'Groups of hashes',
      head: definition.content,
      characteristics: [],
      settings: FitSettings.parse({ name: 'folds' }),
    });
    expect(specification.fit.folds).toMatchObject({ groups: 'customer_id', groupsBy: 'first-row' });
    const file = sourceOfFile(await readColumns(inOnePiece(text), specification.data, { mostRows: 10_000, mostColumns: 10 }));
    const stored = await openSample(server.context.sequelize, definition.sampleId as string, ['customer_id', 'income', 'bad']);
    const [fromFile, fromStore] = [prepare(specification, file), prepare(specification, stored)];
    expect(Buffer.from(kept.partition).equals(Buffer.from(fromFile.partition))).toBe(true);
    expect(fromStore.folds).toEqual(fromFile.folds);
    expect(new Set(fromFile.folds).size).toBe(specification.fit.folds && 'count' in specification.fit.folds ? specification.fit.folds.count + 1 : 0);
  });

  it('is tested by no rule of its values', async () => {
    const { path } = await modeller.sample(modelId, applicants());
    const tests = [
      { column: 'member', in: [member(3)] },
      { column: 'folder', below: 20_100 },
      { column: 'folder', missing: true },
    ];
    const refused = await confirm(path, (content) => ({
      ...columnsAs(content, { member: 'identifier', folder: 'identifier' }),
      exclusions: tests.map((test, place) => ({ reason: `rule ${place + 1}`, combine: 'all', tests: [test] })),
    }));
    expect(refused.status).toBe(422);
    expect(refused.body.problems).toMatchObject([
      { code: 'kept-as-hashes', where: { rule: 1, column: 'member' } },
      { code: 'kept-as-hashes', where: { rule: 2, column: 'folder' } },
    ]);
    const { body: columns } = await modeller.get(`${path}/columns`).expect(200);
    expect((columns.columns as ColumnProfile[]).every(({ hashed }) => !hashed)).toBe(true);
  });
});

describe('personal data among the values of a column', () => {
  it('is warned of wherever it stands in the file, and the warning can be answered', async () => {
    // More rows than one segment has: the first says nothing of the address in the second.
    const rows = 70_000;
    const lines = ['income,note,paid_with,bad'];
    for (let row = 0; row < rows; row++) {
      const note = row === 69_000 ? 'wrote from ada@saltmarsh.example' : row % 2 ? 'moved house' : 'nothing';
      lines.push(
        `${900 + ((row * 37) % 5000)},${note},${row % 2 ? '4111111111111111' : '5500000000000004'},${row % 9 === 0 ? 1 : 0}`,
      );
    }
    const { path } = await modeller.sample(modelId, `${lines.join('\n')}\n`);
    const note = await profileOf(path, 'note');
    expect(note).toMatchObject({ hashed: false, mostFrequent: [], valuesComplete: false, suggestedRole: 'not used' });
    const flag = note.flags.find(({ code }) => code === 'holds-personal-data');
    expect(flag).toMatchObject({ weight: 'look', finding: expect.stringContaining('e-mail addresses in 1 row (RFC 5322') });
    const cards = await profileOf(path, 'paid_with');
    expect(cards.flags).toMatchObject([
      { code: 'holds-personal-data', finding: expect.stringContaining('payment cards in 70 000 rows (ISO/IEC 7812') },
    ]);
    expect(cards).toMatchObject({ numeric: null, specialSuspects: [] });
    expect((await profileOf(path, 'income')).flags).toEqual([]);
    const { body: columns } = await modeller.get(`${path}/columns`).expect(200);
    expect(JSON.stringify(columns)).not.toMatch(/ada@|moved house|4111|5500/);

    // A warning is no block: the column can be used, and the report takes an answer.
    const started = await confirm(path, (content) => columnsAs(content, { note: 'characteristic' }));
    expect(await modeller.ended(started.body.id as string)).toMatchObject({ state: 'succeeded' });
    for (let wait = 0; wait < 400 && (await modeller.get(`${path}/quality`)).body.report === null; wait++)
      await new Promise((resolve) => setTimeout(resolve, 50));
    const { body: quality } = await modeller.get(`${path}/quality`).expect(200);
    expect(JSON.stringify(quality)).not.toMatch(/ada@|4111|5500/);
    expect(JSON.stringify((await modeller.get(`${path}/quality/column?column=note`).expect(200)).body)).not.toMatch(
      /ada@|moved house/,
    );
    const answer = { column: 'note', code: 'holds-personal-data', answer: 'accepted', reason: 'An address of the office' };
    const { body: answered } = await modeller
      .post(`${path}/quality/answers`)
      .send(answer)
      .expect((response) => expect(response.status).toBeLessThan(300));
    const held = answered.report.flags.find(
      (one: { column: string; code: string }) => one.column === 'note' && one.code === 'holds-personal-data',
    );
    expect(held).toMatchObject({ answer: { answer: 'accepted' } });
  }, 120_000);
});
