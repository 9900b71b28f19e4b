import type { Binning, CharacteristicDetail } from '@tallystone/contracts/binnings/schema';
import { addCut, edgeBeside, groupCategories, mergeNumeric, moveCut, moveMissing, readBench } from '@tallystone/numeric/bench';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { binningCharacteristics, editsWithoutReason } from '../../server/src/services/binnings/characteristics-of';
import { benchOf, characteristicsOf } from '../support/binned';
import { type BinningWorld, numeric, recordOf, sent, startBinningWorld } from '../support/binning-world';
import type { IntakeServer, Visitor } from '../support/intake';
import { Constraints } from '@tallystone/contracts/binnings/bins';
import type { Transaction } from 'sequelize';
import { inTransaction } from '../../server/src/database/transaction';
import { reclassInRun } from '../../server/src/services/binnings/reclass';

let world: BinningWorld;
let server: IntakeServer;
let modeller: Visitor;
let colleague: Visitor;
let modelId: string;
let binning: Binning;

beforeAll(async () => {
  world = await startBinningWorld();
  ({ server, modeller, colleague, modelId, binning } = world);
}, 120_000);
afterAll(() => server.stop());

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
    const record = await recordOf(world, detail.id);
    expect(record[0]).toMatchObject({ action: 'binning.edited', actorName: 'marian', before, after: edit.after });
    expect(await editsWithoutReason(server.context.sequelize, binning.id)).toEqual([
      { characteristicId: detail.id, column: 'age', what: edit.what },
    ]);
  });

  it('takes a reason later without a new revision, and records it', async () => {
    const { path, etag, detail } = await benchOf(modeller, binning.id, 'age');
    const [{ by: _by, at: _at, inEffect: _inEffect, carriedFrom: _carriedFrom, notCarried: _notCarried, ...edit }] =
      detail.editList;
    const reason = { code: 'round number' as const, text: '' };
    const saved = await colleague
      .put(path)
      .set('If-Match', etag)
      .send({ bins: detail.current, edits: [{ ...edit, reason }] })
      .expect(200);
    expect(saved.body).toMatchObject({ revision: detail.revision, editsWithoutReason: 0, editList: [{ by: 'marian', reason }] });
    expect((await recordOf(world, detail.id))[0]).toMatchObject({
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
    const [{ by: _by, at: _at, inEffect: _inEffect, carriedFrom: _carriedFrom, notCarried: _notCarried, ...edit }] =
      detail.editList;
    const undone = await modeller.put(path).set('If-Match', etag).send({ bins: detail.automatic, edits: [] }).expect(200);
    expect(undone.body).toMatchObject({ editList: [], edits: 0, current: detail.automatic });
    expect(undone.body.definition.classing.made).toBe('automatic');
    const redone = await modeller
      .put(path)
      .set('If-Match', undone.headers.etag)
      .send({ bins: edit.after, edits: [edit] })
      .expect(200);
    expect(redone.body.editList).toHaveLength(1);
    expect((await recordOf(world, detail.id)).slice(0, 2).map(({ action }) => action)).toEqual([
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
    const {
      by: _by,
      at: _at,
      inEffect: _inEffect,
      carriedFrom: _carriedFrom,
      notCarried: _notCarried,
      ...edit
    } = age.detail.editList[0];
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
      const known = detail.editList.map(
        ({ by: _by, at: _at, inEffect: _inEffect, carriedFrom: _carriedFrom, notCarried: _notCarried, ...edit }) => edit,
      );
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
    // A trend that is to be chosen says so, for folds to choose it again.
    const chosenTrend = { characteristics: await chosen('age'), constraints: { ...constraints, trend: 'cross-validated' } };
    await modeller.post(url).send(chosenTrend).expect(200);
    expect((await benchOf(modeller, binning.id, 'age')).detail.definition.classing).toMatchObject({
      trendBy: 'cross-validation',
    });
    expect(stale.body.problems.map(({ where }: { where: { column: string } }) => where.column)).toEqual(['age', 'utilisation']);
  });

  it('classes any number of them anew in a run, which gives the same bins and stores nothing where one was changed meanwhile', async () => {
    const all = (await characteristicsOf(modeller, binning.id)).characteristics.map(({ id, revision }) => ({ id, revision }));
    const many = Array.from({ length: 11 }, (_, index) => all[index % all.length]);
    const atOnce = await modeller.post(`/api/binnings/${binning.id}/reclassings`).send({ characteristics: many, constraints }).expect(422);
    expect(atOnce.body.problems[0]).toMatchObject({ code: 'too-many-at-once' });

    const start = (key: string, characteristics: object[], more: object = {}) =>
      modeller.post(`/api/binnings/${binning.id}/reclassing-runs`).set('Idempotency-Key', key).send({ characteristics, constraints, reason: 'Fewer bins', ...more });
    const wanted = { characteristics: await chosen('age', 'utilisation'), constraints, reason: 'Fewer bins' };
    const direct = await modeller.post(`/api/binnings/${binning.id}/reclassings`).send(wanted).expect(200);
    const before = await benchOf(modeller, binning.id, 'age');
    // Edited by hand again, so that there is something to class away.
    const bins = numeric(before.detail);
    const edit = sent(bins, moveCut(before.detail.fine, bins, 0, edgeBeside(before.detail.fine, bins, 0, 1)!), { code: 'round number', text: '' });
    await modeller.put(before.path).set('If-Match', before.etag).send({ bins: edit.after, edits: [edit] }).expect(200);
    await start('reclass-silently', await chosen('age'), { reason: '' }).expect(422);
    const stale = await start('reclass-stale', wanted.characteristics).expect(412);
    expect(stale.body.problems).toMatchObject([{ where: { column: 'age' } }, { where: { column: 'utilisation' } }]);
    const started = await start('reclass-now', await chosen('age', 'utilisation')).expect(202);
    const run = await modeller.ended(started.body.runId as string);
    expect(run).toMatchObject({ state: 'succeeded', kind: 'binning.reclass', result: { characteristics: 2 } });
    const after = await benchOf(modeller, binning.id, 'age');
    expect(after.detail).toMatchObject({ edits: 0, current: before.detail.current });
    const listed = await characteristicsOf(modeller, binning.id);
    expect(listed.characteristics[0].informationValue).toBe(direct.body.characteristics[0].informationValue);
    expect((await recordOf(world, after.detail.id))[0]).toMatchObject({ action: 'binning.reclassed', actorName: 'marian', reason: 'Fewer bins' });

    // Changed after the run was started: it stores nothing and says which.
    const outdated = await chosen('age', 'utilisation');
    const { etag, path, detail } = await benchOf(modeller, binning.id, 'utilisation');
    const own = numeric(detail);
    const moved = sent(own, moveCut(detail.fine, own, 0, edgeBeside(detail.fine, own, 0, 1)!), { code: 'round number', text: '' });
    await modeller.put(path).set('If-Match', etag).send({ bins: moved.after, edits: [moved] }).expect(200);
    const inside = {
      context: server.context,
      run: { personId: modeller.personId },
      signal: new AbortController().signal,
      progress: () => undefined,
      finish: (work: (tx: Transaction) => Promise<unknown>) => inTransaction(server.context.sequelize, work),
    } as unknown as Parameters<typeof reclassInRun>[1];
    const asked = { binningId: binning.id, characteristics: outdated, constraints: Constraints.parse({ ...constraints, fineClasses: 100 }), reason: 'Late' };
    await expect(reclassInRun(asked, inside)).rejects.toMatchObject({ status: 412, problems: [{ where: { column: 'utilisation' } }] });
    expect((await benchOf(modeller, binning.id, 'utilisation')).detail).toMatchObject({ edits: 1, current: moved.after });
    expect((await chosen('age'))[0].revision).toBe(outdated[0].revision);
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
    expect((await recordOf(world, region.id))[0]).toMatchObject({
      action: 'binning.left-out',
      reason: 'Not available at application',
    });
    await modeller
      .post(url)
      .send({ characteristics: await chosen('region'), included: true })
      .expect(200);
    expect(await columns()).toEqual(['age', 'utilisation', 'home', 'region']);
  });
});

describe('the step of the work', () => {
  it('shows in the work’s rule', async () => {
    const { body } = await modeller.get(`/api/models/${modelId}/work`).expect(200);
    expect(body.steps.find(({ step }: { step: string }) => step === 'binning')).toMatchObject({
      state: 'done',
      caption: expect.stringMatching(/\d characteristics/) as string,
    });
  });
});
