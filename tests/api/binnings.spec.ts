import { randomUUID } from 'node:crypto';
import type { Bins, NumericBins } from '@tallystone/contracts/binnings/bins';
import type { SentEdit } from '@tallystone/contracts/binnings/edits';
import type { Binning, CharacteristicDetail } from '@tallystone/contracts/binnings/schema';
import type { BinnedCharacteristic } from '@tallystone/contracts/specification/types';
import { parseSpecification } from '@tallystone/contracts/specification/schema';
import {
  addCut,
  edgeBeside,
  groupCategories,
  mergeNumeric,
  moveCut,
  moveMissing,
  readBench,
  type Bins as BenchBins,
  type EditOf,
} from '@tallystone/numeric/bench';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { codeCharacteristics } from '../../server/src/replay/coding';
import { DEVELOPMENT, GOOD, BAD } from '../../server/src/replay/types';
import { binningCharacteristics, editsWithoutReason } from '../../server/src/services/binnings/characteristics-of';
import { loadCodes } from '../../server/src/services/binnings/load-codes';
import { findDefinition, loadPrepared } from '../../server/src/services/samples/definitions';
import { openSample } from '../../server/src/storage/columnStore';
import { benchOf, characteristicsOf, classApplicants, defineApplicants } from '../support/binned';
import { IntakeServer, type Visitor } from '../support/intake';

let server: IntakeServer;
let modeller: Visitor;
let colleague: Visitor;
let stranger: Visitor;
let validator: Visitor;
let modelId: string;
let definitionId: string;
let binning: Binning;

beforeAll(async () => {
  server = await IntakeServer.start();
  modeller = await server.signIn('marian', 'modeller');
  colleague = await server.signIn('colin', 'modeller');
  stranger = await server.signIn('oswin', 'modeller');
  validator = await server.signIn('vera', 'validator');
  modelId = await modeller.model();
  await modeller.post(`/api/models/${modelId}/members`).send({ personId: colleague.personId }).expect(201);
  ({ definitionId } = await defineApplicants(modeller, modelId));
  binning = await classApplicants(modeller, modelId, definitionId);
}, 120_000);
afterAll(() => server.stop());

/** An edit as the client sends it. */
const sent = (before: Bins, edit: EditOf<BenchBins> | null, reason: SentEdit['reason'] = null): SentEdit => {
  if (!edit) throw new Error('The edit cannot be done');
  return { id: randomUUID(), kind: edit.kind, what: edit.what, before, after: edit.bins as Bins, reason };
};
const numeric = (detail: CharacteristicDetail): NumericBins => {
  if (detail.current.kind !== 'numeric') throw new Error('Not numeric');
  return detail.current;
};
const recordOf = async (entityId: string) =>
  (await modeller.get(`/api/record?modelId=${modelId}&entityId=${entityId}&limit=200`).expect(200)).body.entries as {
    action: string;
    actorName: string;
    before: unknown;
    after: unknown;
    reason: string | null;
  }[];

describe('automatic classing', () => {
  it('classes every characteristic and bars what is protected', async () => {
    expect(binning).toMatchObject({
      state: 'ready',
      number: 1,
      characteristics: 5,
      included: 4,
      edits: 0,
      outOfTime: 'covered',
      abilities: ['edit'],
    });
    expect(binning.barred).toEqual([{ column: 'gender', reason: expect.stringContaining('Protected') as string }]);
    const { characteristics, finding } = await characteristicsOf(modeller, binning.id);
    expect(characteristics.map(({ column, kind, included, trend }) => [column, kind, included, trend])).toEqual([
      ['age', 'numeric', true, 'rising'],
      ['utilisation', 'numeric', true, 'falling'],
      ['home', 'categorical', true, 'none'],
      ['region', 'categorical', true, 'none'],
      ['branch_code', 'categorical', false, 'none'],
    ]);
    expect(characteristics[4].leftOutReason).toContain('one bin');
    expect(characteristics[1].reading).not.toBe('none');
    expect(finding).toMatch(/\d of 4 characteristics/);
  });

  it('keeps the constraints in every bin of the cuts', async () => {
    const { detail } = await benchOf(modeller, binning.id, 'utilisation');
    const reading = readBench(detail.fine, detail.current);
    const known = reading.bins.filter(({ kind }) => kind === 'cut');
    const rows = known.reduce((sum, { figures }) => sum + figures.development!.rows, 0);
    for (const { figures } of known) {
      expect(figures.development!.rows).toBeGreaterThanOrEqual(0.05 * rows);
      expect(figures.development!.goods).toBeGreaterThanOrEqual(20);
      expect(figures.development!.bads).toBeGreaterThanOrEqual(20);
    }
    expect(known.length).toBeLessThanOrEqual(8);
  });

  it('stores exactly one entry of a specification for each', async () => {
    for (const column of ['age', 'home']) {
      const { detail } = await benchOf(modeller, binning.id, column);
      const parsed = parseSpecification({
        format: 'tallystone-specification',
        formatVersion: 1,
        outcome: { column: 'bad', good: ['0'], bad: ['1'], indeterminate: [], excluded: [] },
        partition: { seed: 1, holdOutShare: 0.3, outOfTime: null },
        characteristics: [detail.definition],
        fit: { mixing: 1, lambda: { value: 0.01 } },
      });
      if ('problems' in parsed) throw new Error(JSON.stringify(parsed.problems));
      expect(parsed.specification.characteristics[0]).toEqual(detail.definition);
      expect(detail.definition.classing).toEqual({
        made: 'automatic',
        ...binning.constraints,
        trend: column === 'age' ? 'rising' : 'any',
      });
    }
  });

  it('says what a browser calculates from the same counts', async () => {
    for (const { column, informationValue, gini, trend, missingShare, bins } of (await characteristicsOf(modeller, binning.id))
      .characteristics) {
      const { detail } = await benchOf(modeller, binning.id, column);
      const reading = readBench(detail.fine, detail.current);
      expect({
        informationValue: reading.informationValue,
        gini: reading.gini,
        trend: reading.trend,
        missingShare: reading.missingShare,
        bins: reading.bins.length,
      }).toEqual({ informationValue, gini, trend, missingShare, bins });
    }
  });

  it('counts what the chain counts from the rows', async () => {
    const { sequelize } = server.context;
    const definition = (await findDefinition(sequelize, definitionId))!;
    const prepared = await loadPrepared(sequelize, definitionId);
    const { detail } = await benchOf(modeller, binning.id, 'utilisation');
    const source = await openSample(sequelize, definition.sampleId, ['utilisation']);
    const coded = codeCharacteristics({ data: definition.content.data, characteristics: [detail.definition] }, source, prepared)
      .characteristics[0];
    const reading = readBench(detail.fine, detail.current);
    const goods = new Array<number>(coded.bins.length).fill(0);
    const bads = new Array<number>(coded.bins.length).fill(0);
    coded.codes!.forEach((bin, row) => {
      if (prepared.partition[row] !== DEVELOPMENT) return;
      if (prepared.outcome[row] === GOOD) goods[bin]++;
      else if (prepared.outcome[row] === BAD) bads[bin]++;
    });
    expect(reading.bins.map(({ label }) => label)).toEqual(coded.bins.map(({ label }) => label));
    expect(reading.bins.map(({ figures }) => figures.development!.goods)).toEqual(goods);
    expect(reading.bins.map(({ figures }) => figures.development!.bads)).toEqual(bads);
    expect(coded.bins.at(-2)?.label).toBe('no bureau record');
  });

  it('is one binning however often the same request is sent', async () => {
    const key = randomUUID();
    const body = { definitionId, name: 'Coarser', constraints: { mostBins: 3 } };
    const answers = await Promise.all(
      Array.from({ length: 5 }, () =>
        modeller.post(`/api/models/${modelId}/binnings`).set('Idempotency-Key', key).send(body).expect(201),
      ),
    );
    expect(new Set(answers.map(({ body: { id } }) => id as string)).size).toBe(1);
    await modeller.ended(answers[0].body.runId);
    const { characteristics } = await characteristicsOf(modeller, answers[0].body.id);
    const bins = await benchOf(modeller, answers[0].body.id, 'utilisation');
    expect(numeric(bins.detail).edges.length).toBeLessThanOrEqual(2);
    expect(characteristics).toHaveLength(5);
    const list = await modeller.get(`/api/models/${modelId}/binnings`).expect(200);
    expect(list.body.binnings.map(({ number }: { number: number }) => number)).toEqual([2, 1]);
  });

  it('refuses a definition of another model, and settings that are none', async () => {
    const elsewhere = await modeller.model('Cards');
    const wrong = await modeller.post(`/api/models/${elsewhere}/binnings`).send({ definitionId, name: 'x' }).expect(422);
    expect(wrong.body.problems).toMatchObject([{ code: 'no-such-definition' }]);
    const bad = await modeller
      .post(`/api/models/${modelId}/binnings`)
      .send({ definitionId, name: ' ', constraints: { mostBins: 0, smallestShare: 0.9 }, extra: 1 })
      .expect(422);
    expect(bad.body.problems.length).toBeGreaterThanOrEqual(4);
  });

  it('leaves nothing behind when it is cancelled', async () => {
    const started = await modeller.post(`/api/models/${modelId}/binnings`).send({ definitionId, name: 'Not wanted' }).expect(201);
    await modeller.post(`/api/runs/${started.body.runId}/cancel`).send({});
    const run = await modeller.ended(started.body.runId);
    const list = await modeller.get(`/api/models/${modelId}/binnings`).expect(200);
    const names = list.body.binnings.map(({ name }: { name: string }) => name);
    // Whichever came first, the end or the wish: it is whole or it is not there.
    expect(names.includes('Not wanted')).toBe(run.state === 'succeeded');
  });
});

describe('the bench of one characteristic', () => {
  it('saves bins with the edits that made them, and recalculates', async () => {
    const { path, etag, detail } = await benchOf(modeller, binning.id, 'age');
    const before = numeric(detail);
    const edit = sent(before, moveCut(detail.fine, before, 0, edgeBeside(detail.fine, before, 0, 1)!));
    const saved = await modeller
      .put(path)
      .set('If-Match', etag)
      .send({ bins: edit.after, edits: [edit] })
      .expect(200);
    const after = saved.body as CharacteristicDetail;
    expect(after.current).toEqual(edit.after);
    expect(after.automatic).toEqual(before);
    expect(after.definition.classing).toEqual({ made: 'by hand' });
    expect(after.revision).toBe(detail.revision + 1);
    expect(saved.headers.etag).toBe(`"${after.revision}"`);
    expect(after.informationValue).toBe(readBench(detail.fine, edit.after).informationValue);
    expect(after.editList).toMatchObject([{ id: edit.id, what: edit.what, by: 'marian', inEffect: true, reason: null }]);
    expect(after.editsWithoutReason).toBe(1);
    const record = await recordOf(detail.id);
    expect(record[0]).toMatchObject({ action: 'binning.edited', actorName: 'marian', before, after: edit.after });
    expect(await editsWithoutReason(server.context.sequelize, binning.id)).toEqual([
      { characteristicId: detail.id, column: 'age', what: edit.what },
    ]);
  });

  it('takes a reason later without a new revision, and records it', async () => {
    const { path, etag, detail } = await benchOf(modeller, binning.id, 'age');
    const [{ by: _by, at: _at, inEffect: _inEffect, ...edit }] = detail.editList;
    const reason = { code: 'round number' as const, text: '' };
    const saved = await colleague
      .put(path)
      .set('If-Match', etag)
      .send({ bins: detail.current, edits: [{ ...edit, reason }] })
      .expect(200);
    expect(saved.body).toMatchObject({ revision: detail.revision, editsWithoutReason: 0, editList: [{ by: 'marian', reason }] });
    expect((await recordOf(detail.id))[0]).toMatchObject({
      action: 'binning.reason-given',
      actorName: 'colin',
      reason: 'round number',
    });
    // A client that has not heard of it does not take it away.
    const again = await modeller
      .put(path)
      .set('If-Match', etag)
      .send({ bins: detail.current, edits: [{ ...edit, reason: null }] })
      .expect(200);
    expect(again.body.editList[0].reason).toEqual(reason);
    const wordless = await modeller
      .put(path)
      .set('If-Match', etag)
      .send({ bins: detail.current, edits: [{ ...edit, reason: { code: 'other', text: ' ' } }] })
      .expect(422);
    expect(wordless.body.problems[0].message).toContain('few words');
  });

  it('undoes and redoes, with a record of both and the history whole', async () => {
    const { path, etag, detail } = await benchOf(modeller, binning.id, 'age');
    const [{ by: _by, at: _at, inEffect: _inEffect, ...edit }] = detail.editList;
    const undone = await modeller.put(path).set('If-Match', etag).send({ bins: detail.automatic, edits: [] }).expect(200);
    expect(undone.body).toMatchObject({ editList: [], edits: 0, current: detail.automatic });
    expect(undone.body.definition.classing.made).toBe('automatic');
    const redone = await modeller
      .put(path)
      .set('If-Match', undone.headers.etag)
      .send({ bins: edit.after, edits: [edit] })
      .expect(200);
    expect(redone.body.editList).toHaveLength(1);
    expect((await recordOf(detail.id)).slice(0, 2).map(({ action }) => action)).toEqual([
      'binning.edit-redone',
      'binning.edit-undone',
    ]);
    const history = await modeller.get(`${path}/edits`).expect(200);
    expect(history.body.edits).toHaveLength(1);
  });

  it('groups categories and moves missing', async () => {
    const { path, etag, detail } = await benchOf(modeller, binning.id, 'home');
    const before = detail.current;
    if (before.kind !== 'categorical') throw new Error('Not categorical');
    const first = sent(before, groupCategories(detail.fine, before, [before.groups[0][0]], before.groups.length - 1), {
      code: 'categories alike',
      text: '',
    });
    const middle = first.after as typeof before;
    const second = sent(middle, moveMissing(middle, 0, 'the first group'), { code: 'other', text: 'few of them' });
    const saved = await modeller
      .put(path)
      .set('If-Match', etag)
      .send({ bins: second.after, edits: [first, second] })
      .expect(200);
    expect(saved.body.definition).toMatchObject({ groups: middle.groups, missing: 0, unseen: 'neutral' });
    expect(saved.body.edits).toBe(2);
  });

  it('reports everything that is wrong with a save', async () => {
    const { path, etag, detail } = await benchOf(modeller, binning.id, 'utilisation');
    const bins = numeric(detail);
    const inside = await modeller
      .put(path)
      .set('If-Match', etag)
      .send({ bins: { ...bins, edges: [12.34567, 3], special: [], missing: 9 }, edits: [] })
      .expect(422);
    expect(inside.body.problems.map(({ code }: { code: string }) => code).sort()).toEqual(
      [
        'cut-inside-fine-class',
        'cut-inside-fine-class',
        'edits-do-not-lead',
        'no-such-bin',
        'not-ascending',
        'special-codes',
      ].filter(
        (code, index, all) => code !== 'cut-inside-fine-class' || !detail.fine.edges.includes(3) || all.indexOf(code) === index,
      ),
    );
    const silent = await modeller
      .put(path)
      .set('If-Match', etag)
      .send({ bins: { ...bins, edges: bins.edges.slice(1) }, edits: [] })
      .expect(422);
    expect(silent.body.problems).toMatchObject([{ code: 'edits-do-not-lead' }]);
    const kind = await modeller
      .put(path)
      .set('If-Match', etag)
      .send({ bins: { kind: 'categorical', groups: [['x']], special: [], missing: 'own', unseen: 'neutral' }, edits: [] })
      .expect(422);
    expect(kind.body.problems[0].code).toBe('wrong-kind');
    await modeller.put(path).set('If-Match', etag).send({ bins: detail.current, edits: [], definition: {} }).expect(422);
  });

  it('does not let a saved edit say something else, or be another characteristic’s', async () => {
    const age = await benchOf(modeller, binning.id, 'age');
    const { by: _by, at: _at, inEffect: _inEffect, ...edit } = age.detail.editList[0];
    await modeller
      .put(age.path)
      .set('If-Match', age.etag)
      .send({ bins: edit.after, edits: [{ ...edit, what: 'Nothing to see' }] })
      .expect(409);
    const { path, etag, detail } = await benchOf(modeller, binning.id, 'utilisation');
    const stolen = { ...sent(detail.current, mergeNumeric(detail.fine, numeric(detail), 0)), id: edit.id };
    await modeller
      .put(path)
      .set('If-Match', etag)
      .send({ bins: stolen.after, edits: [stolen] })
      .expect(409);
  });

  it('asks for the entity tag and refuses a stale one, naming the current', async () => {
    const { path, etag, detail } = await benchOf(modeller, binning.id, 'utilisation');
    const body = { bins: detail.current, edits: [] };
    await modeller.put(path).send(body).expect(428);
    const stale = await modeller.put(path).set('If-Match', '"0"').send(body).expect(412);
    expect(stale.headers.etag).toBe(etag);
    expect(stale.body.code).toBe('stale');
  });

  it('splits a fine class where a typed cut lies, counted from the column', async () => {
    const { path, etag, detail } = await benchOf(modeller, binning.id, 'utilisation');
    const { fine } = detail;
    const edge = 33.33;
    expect(fine.edges).not.toContain(edge);
    const split = await modeller.post(`${path}/fine-edges`).send({ edge }).expect(200);
    const finer = (split.body as CharacteristicDetail).fine;
    expect(split.headers.etag).toBe(etag);
    expect(finer.edges).toEqual([...fine.edges, edge].sort((a, b) => a - b));
    const total = (counts: { rows: number[] }): number => counts.rows.reduce((sum, rows) => sum + rows, 0);
    expect(total(finer.development)).toBe(total(fine.development));
    expect(readBench(finer, detail.current)).toEqual(readBench(fine, detail.current));
    const bins = numeric(detail);
    const edit = sent(bins, addCut(finer, bins, edge), { code: 'limit used in policy', text: '' });
    const saved = await modeller
      .put(path)
      .set('If-Match', etag)
      .send({ bins: edit.after, edits: [edit] })
      .expect(200);
    expect(saved.body.current.edges).toContain(edge);
    await modeller.put(path).set('If-Match', saved.headers.etag).send({ bins, edits: [] }).expect(200);
    const outside = await modeller.post(`${path}/fine-edges`).send({ edge: 1e6 }).expect(422);
    expect(outside.body.problems[0].code).toBe('separates-nothing');
    const home = await benchOf(modeller, binning.id, 'home');
    await modeller.post(`${home.path}/fine-edges`).send({ edge: 1 }).expect(422);
  });

  it('splits taken by several people at once are all there', async () => {
    const { path, detail } = await benchOf(modeller, binning.id, 'age');
    const edges = [33.1, 41.2, 52.3, 61.4];
    await Promise.all(
      edges.map((edge, index) => (index % 2 === 0 ? modeller : colleague).post(`${path}/fine-edges`).send({ edge }).expect(200)),
    );
    const after = await benchOf(modeller, binning.id, 'age');
    expect(after.detail.fine.edges).toEqual([...detail.fine.edges, ...edges].sort((a, b) => a - b));
    expect(readBench(after.detail.fine, after.detail.current)).toEqual(readBench(detail.fine, detail.current));
  });

  it('loses none of 200 racing edits: each is in, or told that it is stale', async () => {
    const { path, detail: start } = await benchOf(modeller, binning.id, 'utilisation');
    const racers = [modeller, colleague, modeller, colleague, modeller, colleague, modeller, colleague];
    const won: string[] = [];
    let stale = 0;
    for (let wave = 0; wave < 200 / racers.length; wave++) {
      const read = await modeller.get(path).expect(200);
      const detail = read.body as CharacteristicDetail;
      const bins = numeric(detail);
      const free = detail.fine.edges.filter((edge) => !bins.edges.includes(edge));
      const known = detail.editList.map(({ by: _by, at: _at, inEffect: _inEffect, ...edit }) => edit);
      const edits = racers.map((_, racer) =>
        sent(bins, bins.edges.length < 20 ? addCut(detail.fine, bins, free[racer]) : mergeNumeric(detail.fine, bins, racer)),
      );
      const saves = await Promise.all(
        racers.map((visitor, racer) =>
          visitor
            .put(path)
            .set('If-Match', read.headers.etag)
            .send({ bins: edits[racer].after, edits: [...known, edits[racer]] }),
        ),
      );
      expect(saves.map(({ status }) => status).sort()).toEqual([200, ...racers.slice(1).map(() => 412)]);
      stale += saves.filter(({ status }) => status === 412).length;
      won.push(edits[saves.findIndex(({ status }) => status === 200)].id);
    }
    expect(won.length + stale).toBe(200);
    const { detail } = await benchOf(modeller, binning.id, 'utilisation');
    expect(detail.editList.map(({ id }) => id)).toEqual(won);
    expect(detail.revision).toBe(start.revision + won.length);
    let from = detail.automatic;
    for (const edit of detail.editList) {
      expect(edit.before).toEqual(from);
      from = edit.after;
    }
    expect(from).toEqual(detail.current);
    const [{ count }] = (
      await server.context.sequelize.query(
        `SELECT count(*)::int AS count FROM record WHERE action = 'binning.edited' AND entity_id = '${detail.id}'`,
      )
    )[0] as { count: number }[];
    expect(count).toBe(won.length + 1);
  }, 120_000);
});

describe('several characteristics at once', () => {
  const chosen = async (...columns: string[]) =>
    (await characteristicsOf(modeller, binning.id)).characteristics
      .filter(({ column }) => columns.includes(column))
      .map(({ id, revision }) => ({ id, revision }));
  const constraints = {
    smallestShare: 0.1,
    smallestGoods: 20,
    smallestBads: 20,
    mostBins: 3,
    smallestDifference: 0.05,
    trend: 'any',
  };

  it('classes anew under other constraints, with a reason where edits go', async () => {
    const characteristics = await chosen('age', 'utilisation');
    const url = `/api/binnings/${binning.id}/reclassings`;
    const silent = await modeller.post(url).send({ characteristics, constraints }).expect(422);
    expect(silent.body.problems[0].code).toBe('reason-missing');
    const done = await modeller
      .post(url)
      .send({ characteristics, constraints, reason: 'Fewer bins for a small sample' })
      .expect(200);
    const [age, utilisation] = done.body.characteristics as { edits: number; revision: number; bins: number }[];
    expect(age).toMatchObject({ edits: 0 });
    expect(utilisation.edits).toBe(0);
    const { detail, path } = await benchOf(modeller, binning.id, 'utilisation');
    expect(numeric(detail).edges.length).toBeLessThanOrEqual(2);
    expect(detail.definition.classing).toMatchObject({ made: 'automatic', mostBins: 3, smallestShare: 0.1 });
    const history = await modeller.get(`${path}/edits`).expect(200);
    expect(history.body.edits).toHaveLength(26);
    expect(history.body.edits.every(({ inEffect }: { inEffect: boolean }) => !inEffect)).toBe(true);
    const stale = await modeller.post(url).send({ characteristics, constraints, reason: 'Again' }).expect(412);
    const now = { characteristics: await chosen('age'), constraints: { ...constraints, mostBins: 8, trend: 'rising' } };
    const rising = await modeller.post(url).send(now).expect(200);
    expect(rising.body.characteristics[0]).toMatchObject({ column: 'age', trend: 'rising' });
    expect(stale.body.problems.map(({ where }: { where: { column: string } }) => where.column)).toEqual(['age', 'utilisation']);
  });

  it('leaves out with a reason, takes in again, and fits see what is included', async () => {
    const url = `/api/binnings/${binning.id}/inclusions`;
    await modeller
      .post(url)
      .send({ characteristics: await chosen('region'), included: false })
      .expect(422);
    await modeller
      .post(url)
      .send({ characteristics: await chosen('region'), included: false, reason: 'Not available at application' })
      .expect(200);
    const columns = async () =>
      (await binningCharacteristics(server.context.sequelize, binning.id)).map(({ definition }) => definition.column);
    expect(await columns()).toEqual(['age', 'utilisation', 'home']);
    const [region] = (await characteristicsOf(modeller, binning.id)).characteristics.filter(({ column }) => column === 'region');
    expect(region.leftOutReason).toBe('Not available at application');
    expect((await recordOf(region.id))[0]).toMatchObject({ action: 'binning.left-out', reason: 'Not available at application' });
    await modeller
      .post(url)
      .send({ characteristics: await chosen('region'), included: true })
      .expect(200);
    expect(await columns()).toEqual(['age', 'utilisation', 'home', 'region']);
  });
});

describe('codes for fits', () => {
  it('are those of the chain, the first time and from the cache', async () => {
    const { sequelize } = server.context;
    const included = await binningCharacteristics(sequelize, binning.id);
    const first = await loadCodes(sequelize, binning.id);
    const definition = (await findDefinition(sequelize, definitionId))!;
    const prepared = await loadPrepared(sequelize, definitionId);
    const entries: BinnedCharacteristic[] = included.map(({ definition: entry }) => entry);
    const source = await openSample(
      sequelize,
      definition.sampleId,
      entries.map(({ column }) => column),
    );
    const expected = codeCharacteristics({ data: definition.content.data, characteristics: entries }, source, prepared);
    expect(first).toEqual(expected);
    const [{ count }] = (await sequelize.query('SELECT count(*)::int AS count FROM binning_codes'))[0] as { count: number }[];
    expect(count).toBe(included.length);
    expect(await loadCodes(sequelize, binning.id)).toEqual(expected);
    // A fit keeps the bins it was made of, whatever the binning became since.
    const older = entries.map((entry) => (entry.kind === 'numeric' ? { ...entry, edges: entry.edges.slice(0, 1) } : entry));
    expect(await loadCodes(sequelize, binning.id, older)).toEqual(
      codeCharacteristics({ data: definition.content.data, characteristics: older }, source, prepared),
    );
  });
});

describe('who may do what', () => {
  it('is hidden from strangers, read by validators, edited by members', async () => {
    const { path, etag, detail } = await benchOf(modeller, binning.id, 'age');
    const save = { bins: detail.current, edits: [] };
    for (const url of [
      `/api/models/${modelId}/binnings`,
      `/api/binnings/${binning.id}`,
      `/api/binnings/${binning.id}/characteristics`,
      path,
      `${path}/edits`,
    ]) {
      await stranger.get(url).expect(404);
      await validator.get(url).expect(200);
    }
    await stranger.put(path).set('If-Match', etag).send(save).expect(404);
    await validator.put(path).set('If-Match', etag).send(save).expect(403);
    await validator.post(`/api/models/${modelId}/binnings`).send({ definitionId, name: 'x' }).expect(403);
    await validator.post(`${path}/fine-edges`).send({ edge: 30 }).expect(403);
    expect((await validator.get(path)).body.abilities).toEqual([]);
    await modeller.get(`/api/binnings/${randomUUID()}`).expect(404);
    await modeller.get(`/api/binnings/${binning.id}/characteristics/${randomUUID()}`).expect(404);
    const other = await benchOf(modeller, (await modeller.get(`/api/models/${modelId}/binnings`)).body.binnings[0].id, 'age');
    await modeller.get(`/api/binnings/${binning.id}/characteristics/${other.detail.id}`).expect(404);
  });

  it('shows in the work’s rule', async () => {
    const { body } = await modeller.get(`/api/models/${modelId}/work`).expect(200);
    expect(body.steps.find(({ step }: { step: string }) => step === 'binning')).toMatchObject({
      state: 'done',
      caption: expect.stringMatching(/\d characteristics/) as string,
    });
  });
});

describe('the out-of-time cover', () => {
  const url = (): string => `/api/sample-definitions/${definitionId}/out-of-time`;

  it('keeps figures back until it is opened with a reason, which is recorded', async () => {
    const before = await benchOf(modeller, binning.id, 'utilisation');
    expect(before.detail.fine.outOfTime).toBeNull();
    expect((await modeller.get(url()).expect(200)).body).toEqual({
      definitionId,
      state: 'covered',
      openings: [],
      abilities: ['open'],
    });
    await modeller.post(url()).send({ reason: 'now' }).expect(422);
    await validator.post(url()).send({ reason: 'The validator has a look' }).expect(403);
    await stranger.post(url()).send({ reason: 'A stranger has a look' }).expect(404);
    const opened = await modeller.post(url()).send({ reason: 'The bins are settled and a last check is due' }).expect(201);
    expect(opened.body).toMatchObject({
      state: 'opened',
      openings: [{ by: 'marian', reason: 'The bins are settled and a last check is due' }],
    });
    const after = await benchOf(modeller, binning.id, 'utilisation');
    const rows = after.detail.fine.outOfTime!.rows.reduce((sum, count) => sum + count, 0);
    expect(rows).toBeGreaterThan(100);
    expect(readBench(after.detail.fine, after.detail.current).totals.outOfTime?.informationValue).toBeGreaterThan(0);
    expect((await modeller.get(`/api/binnings/${binning.id}`)).body.outOfTime).toBe('opened');
  });

  it('counts every look', async () => {
    await Promise.all(
      [modeller, colleague, modeller].map((visitor) =>
        visitor.post(url()).send({ reason: 'Looked at once more for the committee' }).expect(201),
      ),
    );
    expect((await modeller.get(url())).body.openings).toHaveLength(4);
    const record = await recordOf(definitionId);
    expect(record.filter(({ action }) => action === 'out-of-time.opened')).toHaveLength(4);
    await expect(server.context.sequelize.query('DELETE FROM out_of_time_openings')).rejects.toThrow(/permission denied/);
  });
});
