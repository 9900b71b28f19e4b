import { inflateRawSync } from 'node:zlib';
import type { CharacteristicBalance, ComparedPartition, DraftBalance } from '@tallystone/contracts/samples/balance';
import type { DraftContent } from '@tallystone/contracts/samples/definition';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { prepare } from '../../server/src/replay/prepare';
import { loadPrepared } from '../../server/src/services/samples/definitions';
import { openSample } from '../../server/src/storage/columnStore';
import { openChunk, readRawFile } from '../../server/src/storage/rawFiles';
import { IntakeServer, type Visitor } from '../support/intake';

let server: IntakeServer;
let modeller: Visitor;
let other: Visitor;
let validator: Visitor;
let modelId: string;

beforeAll(async () => {
  server = await IntakeServer.start();
  modeller = await server.signIn('marian', 'modeller');
  other = await server.signIn('oswin', 'modeller');
  validator = await server.signIn('vera', 'validator');
  modelId = await modeller.model();
});
afterAll(() => server.stop());

const days = (row: number): string => new Date(Date.UTC(2023, 0, 1 + (row % 900))).toISOString().slice(0, 10);

/** 600 invented applicants: every ninth is bad, every seventh declined and without an outcome, twenty are staff. */
function applicants(rows = 600): string {
  const lines = ['application_id,applied_on,age,income,home,channel,bureau_score,gender,decision,bad'];
  for (let row = 0; row < rows; row++) {
    const declined = row % 7 === 0;
    const cells = [
      `SM-${String(row).padStart(6, '0')}`,
      days(row * 3),
      18 + ((row * 7) % 60),
      (900 + ((row * 37) % 5000) / 2).toFixed(2),
      ['owner', 'rent', 'parents', ''][row % 4],
      row % 30 === 0 ? 'staff' : row % 2 === 0 ? 'branch' : 'web',
      row % 11 === 0 ? -999 : 400 + ((row * 13) % 300),
      row % 2 === 0 ? 'f' : 'm',
      declined ? 'declined' : 'accepted',
      declined ? '' : row % 9 === 0 ? '1' : '0',
    ];
    lines.push(cells.join(','));
  }
  return `${lines.join('\n')}\n`;
}

/** Whatever inflates (RFC 1951) of the first places on at which a deflated stream could begin. */
function inflatedFromAnywhere(bytes: Buffer): string[] {
  return Array.from({ length: 40 }, (_, from) => {
    try {
      return inflateRawSync(bytes.subarray(from)).toString('latin1');
    } catch {
      return '';
    }
  });
}

describe('a sample from its file to its definition', () => {
  let path: string;
  let sampleId: string;
  let etag: string;
  let content: DraftContent;
  let comparedBefore: ComparedPartition[];
  let balanceOfDraft: CharacteristicBalance[];

  it('is read, typed and profiled, with every suggestion to be confirmed', async () => {
    const sample = await modeller.sample(modelId, applicants());
    expect(sample.run).toMatchObject({ state: 'succeeded', kind: 'sample.read', result: { rows: 600, columns: 10 } });
    ({ path, id: sampleId } = sample);
    const { body: shown } = await modeller.get(path).expect(200);
    expect(shown).toMatchObject({
      state: 'ready',
      rows: 600,
      columns: 10,
      problems: [],
      runId: null,
      abilities: ['read-file', 'define', 'discard'],
    });
    const { body } = await modeller.get(`${path}/columns`).expect(200);
    const roles = Object.fromEntries(
      body.columns.map((column: { column: string; suggestedRole: string }) => [column.column, column.suggestedRole]),
    );
    expect(roles).toEqual({
      application_id: 'identifier',
      applied_on: 'application date',
      age: 'characteristic',
      income: 'characteristic',
      home: 'characteristic',
      channel: 'characteristic',
      bureau_score: 'characteristic',
      gender: 'characteristic',
      decision: 'decision',
      bad: 'outcome',
    });
    const bureau = body.columns[6];
    expect(bureau).toMatchObject({ kind: 'numeric', specialSuspects: [{ value: '-999', count: 55 }] });
    expect(body.columns[4]).toMatchObject({ kind: 'categorical', missing: 150, distinct: 3 });
  });

  it('keeps what identifies people as keyed hashes in the columns, and the file itself encrypted', async () => {
    const source = await openSample(server.context.sequelize, sampleId, ['application_id', 'income']);
    const ids = source.column('application_id');
    if (ids?.kind !== 'texts') throw new Error('Identifiers are texts');
    expect(ids.texts).toHaveLength(600);
    expect(ids.texts.every((text) => /^[\w-]{22}$/.test(text))).toBe(true);
    const { body } = await modeller.get(`${path}/columns`).expect(200);
    expect(body.columns[0]).toMatchObject({ hashed: true, mostFrequent: [], distinct: 600 });
    // The chunks are deflated before they are encrypted: without the key nothing of the file inflates from what is stored, with another none opens.
    const [chunks] = await server.context.sequelize.query(
      `SELECT c.file_id AS "fileId", c.sequence, c.content FROM raw_chunks c JOIN samples s ON s.raw_file_id = c.file_id WHERE s.id = '${sampleId}'`,
    );
    expect(chunks).toHaveLength(1);
    const [{ fileId, sequence, content: sealed }] = chunks as { fileId: string; sequence: number; content: Buffer }[];
    expect(inflatedFromAnywhere(sealed).filter((one) => one.includes('SM-000'))).toEqual([]);
    await expect(openChunk(server.context.config.keys.identifiers.subarray(0, 32), fileId, sequence, sealed)).rejects.toThrow();
    const parts: Buffer[] = [];
    for await (const bytes of readRawFile(
      server.context.sequelize,
      server.context.config.keys.rawFiles.subarray(0, 32),
      sampleId,
    ))
      parts.push(bytes);
    expect(Buffer.concat(parts).toString()).toBe(applicants());
  });

  it('starts a draft that says what still stands in the way', async () => {
    const read = await modeller.get(`${path}/draft`).expect(200);
    etag = read.headers.etag;
    content = read.body.content;
    expect(content.outcome).toEqual({ good: ['0'], bad: ['1'], indeterminate: [], excluded: [] });
    expect(content.declined).toEqual({ values: ['declined'] });
    expect(content.columns.find(({ column }) => column === 'gender')).toMatchObject({ role: 'not used', protected: true });
    expect(read.body.problems).toMatchObject([{ code: 'special-code-suspected', where: { column: 'bureau_score', value: '-999' } }]);
  });

  it('saves the draft under its tag only, and loses nothing when two people save', async () => {
    content = {
      ...content,
      columns: content.columns.map((column) =>
        column.column === 'bureau_score' ? { ...column, special: [{ label: 'no bureau record', values: [-999] }] } : column,
      ),
      exclusions: [
        { reason: 'staff loans', combine: 'all', tests: [{ column: 'channel', in: ['staff'] }] },
        { reason: 'too young', combine: 'all', tests: [{ column: 'age', below: 21 }] },
      ],
      partition: { by: 'seed', seed: 7, holdOutShare: 0.3, outOfTime: { from: '2025-01-01', to: null } },
    };
    await modeller.put(`${path}/draft`).send(content).expect(428);
    const saves = await Promise.all(
      Array.from({ length: 6 }, () => modeller.put(`${path}/draft`).set('If-Match', etag).send(content)),
    );
    expect(saves.map(({ status }) => status).sort()).toEqual([200, 412, 412, 412, 412, 412]);
    const stale = saves.find(({ status }) => status === 412);
    const saved = saves.find(({ status }) => status === 200);
    expect(stale?.headers.etag).toBe(saved?.headers.etag);
    etag = String(saved?.headers.etag);
  });

  it('reports all problems of a draft together, with their places', async () => {
    const broken: DraftContent = {
      ...content,
      columns: content.columns.map((column) => (column.column === 'income' ? { ...column, role: 'outcome' } : column)),
      outcome: { good: ['0'], bad: ['0'], indeterminate: [], excluded: [] },
      exclusions: [
        { reason: ' ', combine: 'all', tests: [] },
        {
          reason: 'unknown',
          combine: 'any',
          tests: [
            { column: 'nowhere', missing: true },
            { column: 'home', below: 3 },
          ],
        },
      ],
      partition: { by: 'column', development: [], holdOut: [], outOfTime: [] },
    };
    const saved = await modeller.put(`${path}/draft`).set('If-Match', etag).send(broken).expect(200);
    etag = saved.headers.etag;
    const codes = saved.body.problems.map(({ code }: { code: string }) => code);
    expect(codes).toEqual(
      expect.arrayContaining([
        'role-twice',
        'value-twice',
        'no-reason',
        'no-test',
        'no-such-column',
        'not-comparable',
        'no-partition-column',
        'no-development',
      ]),
    );
    const refused = await modeller.post(`${path}/definitions`).send({ revision: saved.body.revision }).expect(422);
    expect(refused.body.problems.length).toBe(codes.length);
    etag = (await modeller.put(`${path}/draft`).set('If-Match', etag).send(content).expect(200)).headers.etag;
  });

  it('shows what the draft gives, with out-of-time covered', async () => {
    const { body } = await modeller.post(`${path}/draft/check`).expect(200);
    expect(body.problems).toEqual([]);
    const { waterfall, partitions, declined } = body.counts;
    expect(waterfall[0]).toMatchObject({ kind: 'source', left: 600 });
    for (let place = 1; place < waterfall.length; place++)
      expect(waterfall[place].left).toBe(waterfall[place - 1].left - waterfall[place].out);
    expect(waterfall.at(-1)).toMatchObject({ kind: 'development', left: partitions.development.rows });
    // Every thirtieth row from 0 is a member of staff; of these 0, 210, 420 are declined and 0, 90, 180, ... bad.
    expect(waterfall[1]).toMatchObject({ kind: 'exclusion', label: 'staff loans', out: 20, outGoods: 11, outBads: 6 });
    // Goods and bads reconcile as rows do: what went into a partition is what its counts say, out-of-time not told while it is covered.
    const stepOf = (kind: string) => waterfall.find((step: { kind: string }) => step.kind === kind);
    const { rows, goods, bads } = partitions.holdOut;
    expect(stepOf('hold-out')).toMatchObject({ out: rows, outGoods: goods, outBads: bads });
    expect(stepOf('out-of-time')).toMatchObject({ out: partitions.outOfTime.rows, outGoods: null, outBads: null });
    expect(stepOf('declined')).toMatchObject({ out: declined, outGoods: null, outBads: null });
    expect(waterfall.at(-1)).toMatchObject({ leftGoods: partitions.development.goods, leftBads: partitions.development.bads });
    for (let place = 1; place < waterfall.length; place++) {
      expect(waterfall[place].leftGoods).toBe(waterfall[place - 1].leftGoods - (waterfall[place].outGoods ?? 0));
      expect(waterfall[place].leftBads).toBe(waterfall[place - 1].leftBads - (waterfall[place].outBads ?? 0));
    }
    // Covered, what is left counts nobody of out-of-time from the first step on: all that is told elsewhere, and nothing beside it.
    const outside = (what: 'outGoods' | 'outBads') =>
      waterfall.reduce((sum: number, step: { kind: string; outGoods: number | null; outBads: number | null }) => sum + (step[what] ?? 0), 0);
    expect(waterfall[0].leftGoods).toBe(outside('outGoods') + partitions.development.goods);
    expect(waterfall[0].leftBads).toBe(outside('outBads') + partitions.development.bads);
    expect(partitions.outOfTime).toMatchObject({ covered: true, bads: null, badRate: null });
    expect(partitions.outOfTime.rows).toBeGreaterThan(0);
    expect(declined).toBeGreaterThan(0);
    const { development, holdOut } = partitions;
    expect(holdOut.goods).toBe(Math.round(0.3 * (development.goods + holdOut.goods)));
    expect(holdOut.bads).toBe(Math.round(0.3 * (development.bads + holdOut.bads)));
  });

  it('compares the partitions of the draft before anything is confirmed, and keeps every one that was compared', async () => {
    const read = async (who: Visitor) => (await who.get(`${path}/draft/balance`).expect(200)).body as DraftBalance;
    const draft = async () => (await modeller.get(`${path}/draft`).expect(200)).body as { revision: number; content: DraftContent };
    const compare = async (key: string, revision: number) => {
      const { body } = await modeller.post(`${path}/draft/balance`).set('Idempotency-Key', key).send({ revision }).expect(202);
      const again = await modeller.post(`${path}/draft/balance`).set('Idempotency-Key', key).send({ revision }).expect(202);
      expect(again.body.id).toBe(body.id);
      return modeller.ended(body.id);
    };
    const resplit = async (seed: number) => {
      const { content: now } = await draft();
      if (now.partition.by !== 'seed') throw new Error('The sample is split by a seed');
      etag = (await modeller.put(`${path}/draft`).set('If-Match', etag).send({ ...now, partition: { ...now.partition, seed } }).expect(200)).headers.etag;
    };
    expect(await read(modeller)).toEqual({ last: null, compared: [] });
    const first = await draft();
    const { partition } = first.content;
    if (partition.by !== 'seed') throw new Error('The sample is split by a seed');
    await modeller.post(`${path}/draft/balance`).send({ revision: first.revision - 1 }).expect(412);
    await validator.post(`${path}/draft/balance`).send({ revision: first.revision }).expect(403);
    await other.get(`${path}/draft/balance`).expect(404);
    expect(await compare('compare-the-first', first.revision)).toMatchObject({ state: 'succeeded', result: { revision: first.revision } });
    const found = await read(validator);
    expect(found.last).toMatchObject({ revision: first.revision, current: true });
    expect(found.last?.characteristics?.map(({ column }) => column)).toEqual(['age', 'income', 'home', 'channel', 'bureau_score']);
    expect(JSON.stringify(found)).not.toMatch(/good|bad/i);
    // Another seed: what was compared is not of this draft any more, and stays among what was compared.
    await resplit(partition.seed + 1);
    expect((await read(modeller)).last).toMatchObject({ current: false });
    await compare('compare-the-second', (await draft()).revision);
    await resplit(partition.seed);
    await compare('compare-the-third', (await draft()).revision);
    const { last, compared } = await read(modeller);
    expect(last).toMatchObject({ current: true, characteristics: found.last?.characteristics });
    expect(compared).toMatchObject([
      { partition: expect.stringMatching(`^seed ${partition.seed + 1}, 30 % hold-out, out-of-time by applied_on from `), comparedBy: 'marian' },
      { partition: expect.stringMatching(`^seed ${partition.seed}, `) },
    ]);
    // One seed draws other people than another.
    expect(compared[0].largest).not.toBe(compared[1].largest);
    const { body: record } = await validator.get(`/api/record?modelId=${modelId}&limit=200`).expect(200);
    const events = (record.entries as { action: string; after: unknown }[]).filter(({ action }) => action === 'sample.compared');
    expect(events).toHaveLength(3);
    comparedBefore = compared;
    balanceOfDraft = last?.characteristics ?? [];
  });

  it('confirms it as an immutable definition that the chain repeats exactly', async () => {
    const { body: draft } = await modeller.get(`${path}/draft`).expect(200);
    const key = 'confirm-once-only';
    const sends = await Promise.all(
      Array.from({ length: 5 }, () =>
        modeller.post(`${path}/definitions`).set('Idempotency-Key', key).send({ revision: draft.revision }).expect(202),
      ),
    );
    expect(new Set(sends.map(({ body }) => body.id)).size).toBe(1);
    const run = await modeller.ended(sends[0].body.id);
    expect(run).toMatchObject({ state: 'succeeded', result: { number: 1 } });
    const { definitionId } = run.result as { definitionId: string };
    const { body: definition } = await validator.get(`${path}/definitions/${definitionId}`).expect(200);
    expect(definition.counts.partitions.outOfTime).toMatchObject({ covered: true, bads: null });
    expect(definition.content.exclusions[0]).toEqual({ reason: 'staff loans', column: 'channel', in: ['staff'] });
    const source = await openSample(server.context.sequelize, sampleId, ['bad', 'decision', 'channel', 'age', 'applied_on']);
    const again = prepare(definition.content, source);
    const stored = await loadPrepared(server.context.sequelize, definitionId);
    expect(stored.counts).toEqual(again.counts);
    expect(Buffer.from(stored.partition).equals(Buffer.from(again.partition))).toBe(true);
    expect(Buffer.from(stored.outcome).equals(Buffer.from(again.outcome))).toBe(true);
    expect([...stored.exclusion]).toEqual([...again.exclusion]);
    // The inputs are compared partition by partition, for the validator too, and no outcome is told.
    const { body: balance } = await validator.get(`${path}/definitions/${definitionId}/balance`).expect(200);
    expect(balance.definitionId).toBe(definitionId);
    // The same as the draft was told, with all that was compared before.
    expect(balance.characteristics).toEqual(balanceOfDraft);
    expect(balance.compared).toEqual(comparedBefore);
    expect((await modeller.get(`${path}/draft/balance`).expect(200)).body.compared).toEqual([]);
    expect(balance.characteristics.map(({ column }: { column: string }) => column)).toEqual(['age', 'income', 'home', 'channel', 'bureau_score']);
    const { development, holdOut } = stored.counts;
    for (const { holdOut: reading } of balance.characteristics) {
      expect(reading.rows).toBe(holdOut.goods + holdOut.bads);
      // 95 % point of chi-square(classes - 1) times (1/N + 1/M): 1 and 2 degrees of freedom are in any table of it, 3.841 and 5.991.
      const unit = 1 / (development.goods + development.bads) + 1 / reading.rows;
      if (reading.classes <= 3) expect(reading.criticalValue).toBeCloseTo([3.841459, 5.991465][reading.classes - 2] * unit, 6);
      expect(reading.pValue < 0.05).toBe(reading.index > reading.criticalValue);
    }
    // Staff is excluded, so that branch and web are left.
    expect(balance.characteristics[3].holdOut.classes).toBe(2);
    // Without the identifier, whose digits may spell a word.
    expect(JSON.stringify(balance.characteristics)).not.toMatch(/good|bad/i);
    await other.get(`${path}/definitions/${definitionId}/balance`).expect(404);
    await expect(server.context.sequelize.query(`UPDATE sample_balances SET characteristics = '[]'`)).rejects.toThrow(/permission denied/);
    const { body: work } = await modeller.get(`/api/models/${modelId}/work`).expect(200);
    expect(work.steps[0]).toMatchObject({ step: 'sample', state: 'done' });
  });

  it('cannot be changed or removed once something rests on it, not even in the database', async () => {
    await modeller
      .post(`${path}/readings`)
      .send((await modeller.get(path)).body.reading)
      .expect(403);
    await modeller.delete(path).expect(403);
    await expect(server.context.sequelize.query(`UPDATE sample_definitions SET number = 2`)).rejects.toThrow(/permission denied/);
    await expect(server.context.sequelize.query(`DELETE FROM definition_segments`)).rejects.toThrow(/permission denied/);
  });

  it('is nothing to anyone outside the model', async () => {
    const otherModel = await other.model('Of another team');
    for (const tail of ['', '/columns', '/draft', '/definitions']) {
      await other.get(path + tail).expect(404);
      // The sample under the address of a model that one does see.
      await other.get(`/api/models/${otherModel}/samples/${sampleId}${tail}`).expect(404);
      await validator.get(path + tail).expect(200);
    }
    await other.get(`/api/models/${modelId}/samples`).expect(404);
    await other.put(`${path}/draft`).set('If-Match', etag).send(content).expect(404);
    await validator.put(`${path}/draft`).set('If-Match', etag).send(content).expect(403);
    await validator.post(`${path}/draft/check`).expect(403);
  });
});

describe('outcomes that cannot be fitted are blocked with their values and counts', () => {
  const file = (outcomes: readonly string[], extra = ''): string =>
    `income,bad${extra === '' ? '' : ',w'}\n${outcomes.map((bad, row) => `${1000 + ((row * 37) % 500)},${bad}${extra === '' ? '' : `,${extra.split(' ')[row % extra.split(' ').length]}`}`).join('\n')}\n`;
  const twenty = (make: (row: number) => string): string[] => Array.from({ length: 40 }, (_, row) => make(row));
  const draftOf = async (
    csv: string,
  ): Promise<{ path: string; etag: string; content: DraftContent; problems: { code: string; message: string }[] }> => {
    const { path } = await modeller.sample(modelId, csv);
    const { body, headers } = await modeller.get(`${path}/draft`).expect(200);
    return { path, etag: headers.etag, content: body.content, problems: body.problems };
  };

  it('one class', async () => {
    const { path, etag, content } = await draftOf(file(twenty(() => '0')));
    const columns = content.columns.map((column) => (column.column === 'bad' ? { ...column, role: 'outcome' as const } : column));
    const saved = await modeller
      .put(`${path}/draft`)
      .set('If-Match', etag)
      .send({ ...content, columns, outcome: { good: ['0'], bad: ['1'], indeterminate: [], excluded: [] } });
    expect(saved.body.problems).toMatchObject([
      { code: 'one-class', message: 'The outcome has one class only: "0" 40×. A fit needs goods and bads.' },
    ]);
  });

  it('a third value and missing ones, until they are mapped', async () => {
    const { path, etag, content, problems } = await draftOf(file(twenty((row) => ['0', '0', '1', '2', ''][row % 5])));
    expect(problems.map(({ message }) => message)).toEqual([
      'The outcome is "2" in 8 rows: say whether that is good, bad, indeterminate or excluded.',
      'The outcome is empty in 8 rows: say whether that is good, bad, indeterminate or excluded.',
    ]);
    const outcome = { ...content.outcome, indeterminate: ['2'], excluded: [''] };
    const saved = await modeller
      .put(`${path}/draft`)
      .set('If-Match', etag)
      .send({ ...content, outcome })
      .expect(200);
    expect(saved.body.problems).toEqual([]);
    const { body } = await modeller.post(`${path}/draft/check`).expect(200);
    expect(body.counts.waterfall.find(({ kind }: { kind: string }) => kind === 'outcome')).toMatchObject({ out: 8 });
    const { development, holdOut } = body.counts.partitions;
    expect(development.indeterminates + holdOut.indeterminates).toBe(8);
    // 16 goods, 8 bads and 8 indeterminates; three in ten of each class that is drawn from, rounded, are hold-out.
    const rate = (goods: number, bads: number) => ({ goods, bads, badRate: bads / (goods + bads) });
    expect(body.counts.sensitivity).toEqual([
      { indeterminates: 'as they are', development: rate(11, 6), holdOut: rate(5, 2) },
      { indeterminates: 'as good', development: rate(17, 6), holdOut: rate(7, 2) },
      { indeterminates: 'as bad', development: rate(11, 11), holdOut: rate(5, 5) },
    ]);
  });

  it('a rule on days past due and months on book, with what each part takes', async () => {
    const lines = Array.from({ length: 80 }, (_, row) => `${1000 + ((row * 37) % 500)},${row % 8 === 0 ? 120 : row % 8 === 1 ? 45 : row % 8},${row % 20 === 0 ? '' : row % 10 === 5 ? 6 : 24}`);
    const { path, etag, content } = await draftOf(`income,dpd,months\n${lines.join('\n')}\n`);
    const as = (roles: Record<string, 'outcome' | 'characteristic' | 'not used'>) =>
      content.columns.map((column) => ({ ...column, role: roles[column.column] ?? column.role }));
    const rule = { bad: 90, indeterminate: 30, missing: 'refuse', monthsOnBook: { column: 'months', least: 12 } };
    const outcome = { good: [], bad: [], indeterminate: [], excluded: [], rule };
    const save = (tag: string, change: object) => modeller.put(`${path}/draft`).set('If-Match', tag).send({ ...content, ...change });
    const leaking = await save(etag, { columns: as({ dpd: 'outcome', months: 'characteristic' }), outcome: { ...outcome, rule: { ...rule, indeterminate: 90 } } }).expect(200);
    expect(leaking.body.problems.map(({ code }: { code: string }) => code)).toEqual(['rule-order', 'leaks']);
    const columns = as({ dpd: 'outcome', months: 'not used' });
    const saved = await save(leaking.headers.etag, { columns, outcome }).expect(200);
    expect(saved.body.problems).toEqual([]);
    // Rows 0, 20, 40, 60 have no months on book.
    const refused = await modeller.post(`${path}/draft/check`).expect(200);
    expect(refused.body.problems).toMatchObject([{ code: 'no-months-on-book', where: { column: 'months' } }]);
    const whole = await save(saved.headers.etag, { columns, outcome: { ...outcome, rule: { ...rule, missing: 'excluded' } } }).expect(200);
    const { body } = await modeller.post(`${path}/draft/check`).expect(200);
    // Every tenth from row 5 is too young: none of them falls on a multiple of 8, four on a remainder of 1 or 5 each.
    const left = Array.from({ length: 80 }, (_, row) => row).filter((row) => row % 20 !== 0 && row % 10 !== 5);
    const having = (remainder: (row: number) => boolean) => left.filter((row) => remainder(row % 8)).length;
    const [bads, indeterminates] = [having((at) => at === 0), having((at) => at === 1)];
    const goods = left.length - bads - indeterminates;
    expect(body.counts.byRule).toEqual({ tooFewMonths: 8, missing: 4, bads, indeterminates, goods, badRate: bads / (goods + bads) });
    expect(body.counts.waterfall.find(({ kind }: { kind: string }) => kind === 'outcome')).toMatchObject({ out: 12 });
    const started = await modeller.post(`${path}/definitions`).send({ revision: whole.body.revision as number }).expect(202);
    const { definitionId } = (await modeller.ended(started.body.id as string)).result as { definitionId: string };
    const { body: definition } = await modeller.get(`${path}/definitions/${definitionId}`).expect(200);
    expect(definition.content.outcome).toEqual({
      daysPastDue: { column: 'dpd', bad: 90, indeterminate: 30, missing: 'excluded' },
      monthsOnBook: { column: 'months', least: 12 },
    });
  });

  it('rows in no partition, until the missing value has a part', async () => {
    const csv = `income,split,bad\n${Array.from({ length: 200 }, (_, row) => `${1000 + ((row * 37) % 500)},${['dev', '', 'test', 'dev'][row % 4]},${row % 5 === 0 ? 1 : 0}`).join('\n')}\n`;
    const { path, etag, content } = await draftOf(csv);
    expect(content.partition).toEqual({ by: 'column', development: ['dev'], holdOut: ['test'], outOfTime: [] });
    const { body } = await modeller.post(`${path}/draft/check`).expect(200);
    expect(body.problems).toMatchObject([
      {
        code: 'unlisted-partition',
        message: '50 rows are in no partition: empty (50). Say which part each value means, or exclude these rows.',
      },
    ]);
    const partition = { ...content.partition, outOfTime: [''] };
    await modeller
      .put(`${path}/draft`)
      .set('If-Match', etag)
      .send({ ...content, partition })
      .expect(200);
    const given = await modeller.post(`${path}/draft/check`).expect(200);
    expect(given.body).toMatchObject({ problems: [], counts: { partitions: { outOfTime: { rows: 50 } } } });
  });

  it('weights below zero, that are no numbers, or all zero', async () => {
    const outcomes = twenty((row) => (row % 3 === 0 ? '1' : '0'));
    const withWeight = async (weights: string): Promise<string[]> => {
      const { path, etag, content } = await draftOf(file(outcomes, weights));
      const columns = content.columns.map((column) => (column.column === 'w' ? { ...column, role: 'weight' as const } : column));
      const saved = await modeller
        .put(`${path}/draft`)
        .set('If-Match', etag)
        .send({ ...content, columns })
        .expect(200);
      const { body } = await modeller.post(`${path}/draft/check`).expect(200);
      expect(body.problems.length).toBeGreaterThanOrEqual(saved.body.problems.length);
      return body.problems.map(({ code }: { code: string }) => code);
    };
    expect(await withWeight('1.5 0.5 -1 2')).toContain('negative-weight');
    expect(await withWeight('0 0')).toEqual(expect.arrayContaining([expect.stringMatching(/zero-weights/)]));
    expect(await withWeight('1 abc')).toContain('unreadable-weight');
    expect(await withWeight('1 0 2')).toEqual([]);
  });

  it('weights that are none, in the rows that need one alone: excluded rows, and those without an outcome, need none', async () => {
    // 12 rows without a weight, 20 below zero; the goods among the latter are 13.
    const outcome = (row: number): string => (row % 3 === 0 ? '1' : '0');
    const weight = (row: number): string => (row < 12 ? '' : row < 32 ? '-2' : row === 40 ? '0' : '1.5');
    const csv = `income,bad,w\n${Array.from({ length: 200 }, (_, row) => `${1000 + ((row * 37) % 500)},${outcome(row)},${weight(row)}`).join('\n')}\n`;
    const { path, etag, content } = await draftOf(csv);
    let tag = etag;
    const said = async (change: Partial<DraftContent>): Promise<string[]> => {
      const columns = content.columns.map((column) => (column.column === 'w' ? { ...column, role: 'weight' as const } : column));
      const { body, headers } = await modeller.put(`${path}/draft`).set('If-Match', tag).send({ ...content, columns, ...change }).expect(200);
      tag = headers.etag;
      return (body.problems as { code: string; message: string }[]).filter(({ code }) => code.endsWith('-weight')).map(({ message }) => message);
    };
    const below = (rows: number): string =>
      `w has weights below zero in ${rows} rows that need one, the smallest -2. Weights are zero or more: mend them in the file, exclude these rows with a reason (w is below 0), or give the role to another column.`;
    const missing =
      'The weight w is missing in 12 rows that need one; zero is allowed. Mend them in the file, exclude these rows with a reason (w is missing), or give the role to another column.';
    expect(await said({})).toEqual([below(20), missing]);
    const none = { reason: 'no weight', combine: 'all', tests: [{ column: 'w', missing: true }] } as const;
    const negative = { reason: 'no weight below zero', combine: 'all', tests: [{ column: 'w', below: 0 }] } as const;
    const rule = ({ tests, ...rest }: typeof none | typeof negative) => ({ ...rest, tests: [...tests] });
    expect(await said({ exclusions: [rule(none)] })).toEqual([below(20)]);
    expect(await said({ exclusions: [rule(negative)] })).toEqual([missing]);
    // A good that is excluded by its outcome enters no fit; an indeterminate enters those that are made again with them as good and as bad.
    const values = { good: [], bad: ['1'], indeterminate: [], excluded: [] };
    expect(await said({ exclusions: [rule(none)], outcome: { ...values, excluded: ['0'] } })).toEqual([below(7)]);
    expect(await said({ exclusions: [rule(none)], outcome: { ...values, indeterminate: ['0'] } })).toEqual([below(20)]);
    // Values that mean nothing yet may become goods: their rows are counted, too.
    expect(await said({ outcome: { good: [], bad: ['1'], indeterminate: [], excluded: [] } })).toEqual([below(20), missing]);
    expect(await said({ exclusions: [rule(none), rule(negative)] })).toEqual([]);
    const { body } = await modeller.post(`${path}/draft/check`).expect(200);
    expect(body.problems).toEqual([]);
    expect(body.counts.waterfall.slice(1, 3).map(({ out }: { out: number }) => out)).toEqual([12, 20]);
  }); // prettier-ignore

  it('weights beside the bad rate of the rows: where bads were sampled more often the two differ', async () => {
    // Every third is bad and stands for one applicant, every good for four.
    const { path, etag, content } = await draftOf(
      file(
        twenty((row) => (row % 3 === 0 ? '1' : '0')),
        '1 4 4',
      ),
    );
    const columns = content.columns.map((column) => (column.column === 'w' ? { ...column, role: 'weight' as const } : column));
    await modeller
      .put(`${path}/draft`)
      .set('If-Match', etag)
      .send({ ...content, columns })
      .expect(200);
    const { body } = await modeller.post(`${path}/draft/check`).expect(200);
    expect(body.problems).toEqual([]);
    const { development } = body.counts.partitions;
    expect(development.weight).toBe(development.bads + 4 * development.goods);
    expect(development.weightedBadRate).toBeCloseTo(development.bads / development.weight, 12);
    expect(development.weightedBadRate).toBeLessThan(development.badRate / 2);
  });
});
