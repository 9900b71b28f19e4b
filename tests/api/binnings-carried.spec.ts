import { randomUUID } from 'node:crypto';
import type { Bins } from '@tallystone/contracts/binnings/bins';
import type { Binning, BinningHistory, CharacteristicDetail } from '@tallystone/contracts/binnings/schema';
import { addCut, groupCategories, moveCut, readBench } from '@tallystone/numeric/bench';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { applicantsWithRisk, benchOf, characteristicsOf, defineApplicants } from '../support/binned';
import { type BinningWorld, numeric, recordOf, sent, startBinningWorld } from '../support/binning-world';

let world: BinningWorld;
let second: Binning;
const roundCut = { code: 'limit used in policy' as const, text: 'As underwriters know it' };

/** New applicants: more of them, nobody over 60, and no hostel any more. */
function newApplicants(): string {
  const [head, ...rows] = applicantsWithRisk(4000).trimEnd().split('\n');
  const kept = rows.filter((row) => {
    const [, , age, , home] = row.split(',');
    return Number(age) < 60 && home !== 'other';
  });
  return `${head}\n${kept.join('\n')}\n`;
}

async function save(column: string, edits: (detail: CharacteristicDetail) => ReturnType<typeof sent>[]): Promise<void> {
  const { path, etag, detail } = await benchOf(world.modeller, world.binning.id, column);
  const made = edits(detail);
  await world.modeller
    .put(path)
    .set('If-Match', etag)
    .send({ bins: made[made.length - 1].after, edits: made })
    .expect(200);
}

beforeAll(async () => {
  world = await startBinningWorld();
  const { modeller, binning, modelId } = world;
  // A limit inside a fine class, that the new sample has to be split at, and one that it has no values beyond.
  const age = await benchOf(modeller, binning.id, 'age');
  await modeller.post(`${age.path}/fine-edges`).send({ edge: 33.25 }).expect(200);
  await save('age', (detail) => {
    const before = numeric(detail);
    const first = sent(before, addCut(detail.fine, before, 33.25), roundCut);
    const middle = first.after as typeof before;
    const high = detail.fine.edges.find((edge) => edge > 70 && !middle.edges.includes(edge))!;
    return [first, sent(middle, addCut(detail.fine, middle, high), roundCut)];
  });
  await save('utilisation', (detail) => {
    const before = numeric(detail);
    const free = detail.fine.edges.filter((edge) => edge > before.edges[0] && edge < before.edges[1]);
    return [sent(before, moveCut(detail.fine, before, 0, free[Math.floor(free.length / 2)]))];
  });
  await save('home', (detail) => {
    const before = detail.current as Extract<Bins, { kind: 'categorical' }>;
    const apart = before.groups.findIndex((group) => group.includes('other'));
    const target = before.groups.findIndex((_, index) => index !== apart);
    return [sent(before, groupCategories(detail.fine, before, ['other'], target), { code: 'categories alike', text: '' })];
  });
  const { characteristics } = await characteristicsOf(modeller, binning.id);
  const region = characteristics.filter(({ column }) => column === 'region').map(({ id, revision }) => ({ id, revision }));
  await modeller
    .post(`/api/binnings/${binning.id}/inclusions`)
    .send({ characteristics: region, included: false, reason: 'Not known at application' })
    .expect(200);
  const { definitionId } = await defineApplicants(modeller, modelId, newApplicants());
  const started = await modeller
    .post(`/api/models/${modelId}/binnings`)
    .send({ definitionId, name: 'On new applicants', fromBinningId: binning.id })
    .expect(201);
  const run = await modeller.ended(started.body.runId as string);
  expect(run.state).toBe('succeeded');
  second = (await modeller.get(`/api/binnings/${started.body.id}`).expect(200)).body as Binning;
}, 240_000);
afterAll(() => world.server.stop());

describe('a binning of new data that starts from an earlier one', () => {
  it('keeps the edits that make sense and says why the others do not', async () => {
    expect(second.from).toEqual({ id: world.binning.id, name: world.binning.name, carried: 2, notCarried: 2, notHere: [] });
    const { detail } = await benchOf(world.modeller, second.id, 'age');
    expect(detail.current).toMatchObject({ edges: expect.arrayContaining([33.25]) as number[] });
    expect(detail.fine.edges).toContain(33.25);
    expect(detail.editList).toMatchObject([
      {
        what: 'Cut added at 33.25',
        by: 'marian',
        reason: roundCut,
        inEffect: true,
        notCarried: null,
        carriedFrom: { binning: world.binning.name, by: 'marian' },
      },
    ]);
    expect(detail.notCarriedList).toMatchObject([
      {
        what: expect.stringMatching(/^Cut added at 7/) as string,
        inEffect: false,
        notCarried: expect.stringContaining('one side') as string,
      },
    ]);
    expect(detail.definition.classing.made).toBe('by hand');
    const home = await benchOf(world.modeller, second.id, 'home');
    expect(home.detail.notCarriedList).toMatchObject([{ notCarried: 'Fewer than two of its categories are in this sample.' }]);
    expect(home.detail.definition.classing.made).toBe('automatic');
  });

  it('counts them in the list, and what the list says is what the bins say', async () => {
    const { characteristics } = await characteristicsOf(world.modeller, second.id);
    expect(characteristics.map(({ column, edits, notCarried }) => [column, edits, notCarried])).toEqual([
      ['age', 1, 1],
      ['utilisation', 1, 0],
      ['home', 0, 1],
      ['region', 0, 0],
      ['branch_code', 0, 0],
    ]);
    const { detail } = await benchOf(world.modeller, second.id, 'utilisation');
    expect(readBench(detail.fine, detail.current).informationValue).toBe(characteristics[1].informationValue);
    expect(characteristics[3]).toMatchObject({ included: false, leftOutReason: 'Not known at application' });
  });

  it('is in the history and in the record, and the chain of edits has no gap', async () => {
    const { path, etag, detail } = await benchOf(world.modeller, second.id, 'age');
    expect((await world.modeller.get(`${path}/edits`).expect(200)).body.edits).toHaveLength(2);
    const record = await recordOf(world, detail.id);
    expect(record.map(({ action }) => action).sort()).toEqual(['binning.edit-carried', 'binning.edit-not-carried']);
    expect(record.find(({ action }) => action === 'binning.edit-carried')).toMatchObject({
      before: detail.automatic,
      after: detail.current,
      reason: 'limit used in policy: As underwriters know it',
    });
    // It is edited on like any other: the carried edit is sent as it is.
    const known = detail.editList.map(({ id, kind, what, before, after, reason }) => ({ id, kind, what, before, after, reason }));
    const bins = numeric(detail);
    const free = detail.fine.edges.find((edge) => !bins.edges.includes(edge))!;
    const more = sent(bins, addCut(detail.fine, bins, free), roundCut);
    const saved = await world.modeller
      .put(path)
      .set('If-Match', etag)
      .send({ bins: more.after, edits: [...known, more] })
      .expect(200);
    expect(saved.body.edits).toBe(2);
    // Undone like any other, to the bins that the new data gave by themselves.
    await world.modeller.put(path).set('If-Match', saved.headers.etag).send({ bins: detail.automatic, edits: [] }).expect(200);
  });

  it('is in the history of the whole binning, latest first, undone ones included', async () => {
    const { body } = await world.validator.get(`/api/binnings/${second.id}/edits`).expect(200);
    const history = body as BinningHistory;
    expect(history.edits.map(({ column, inEffect, notCarried }) => [column, inEffect, notCarried !== null])).toEqual([
      ['age', false, false],
      ['home', false, true],
      ['utilisation', true, false],
      ['age', false, true],
      ['age', false, false],
    ]);
    expect(history.edits[2]).toMatchObject({
      by: 'marian',
      before: { kind: 'numeric' },
      after: { kind: 'numeric' },
      ended: null,
    });
    // The edit made on this binning was undone; so was the one that was carried over, and one that was not has no end.
    expect(history.edits.map(({ ended }) => ended?.how ?? null)).toEqual(['undone', null, null, null, 'undone']);
    expect(history.edits[0].ended).toMatchObject({ by: 'marian', reason: null });
    expect(Date.parse(history.edits[0].ended!.at)).toBeGreaterThanOrEqual(Date.parse(history.edits[0].at));
    await world.stranger.get(`/api/binnings/${second.id}/edits`).expect(404);
  });

  it('says what was decided about columns that are not classed here, and counts it as not carried over', async () => {
    // Without utilisation and region, and with homes that only later applicants state.
    const [, ...rows] = applicantsWithRisk(3000).trimEnd().split('\n');
    const lines = rows.map((row) => {
      const [id, day, age, , home, , branch, gender, bad] = row.split(',');
      return [id, day, age, day < '2025' ? '' : home, branch, gender, bad].join(',');
    });
    const csv = ['application_id,applied_on,age,home,branch_code,gender,bad', ...lines].join('\n');
    const { definitionId } = await defineApplicants(world.modeller, world.modelId, `${csv}\n`);
    const started = await world.modeller
      .post(`/api/models/${world.modelId}/binnings`)
      .send({ definitionId, name: 'On fewer columns', fromBinningId: world.binning.id })
      .expect(201);
    expect((await world.modeller.ended(started.body.runId as string)).state).toBe('succeeded');
    const { from } = (await world.modeller.get(`/api/binnings/${started.body.id}`).expect(200)).body as Binning;
    const noColumn = 'The sample has no such column.';
    expect(from).toMatchObject({
      carried: 2,
      notCarried: 2,
      notHere: [
        { column: 'home', edits: 1, leftOut: null, why: 'No development row has a value.' },
        { column: 'region', edits: 0, leftOut: 'Not known at application', why: noColumn },
        { column: 'utilisation', edits: 1, leftOut: null, why: noColumn },
      ],
    });
    const record = await recordOf(world, started.body.id as string);
    const lost = record.filter(({ action }) => action === 'binning.not-carried').reverse();
    expect(lost.map(({ reason }) => reason)).toEqual(['No development row has a value.', noColumn, noColumn]);
    expect(lost[0]).toMatchObject({ detail: { column: 'home', edits: 1, leftOut: null } });
  });

  it('starts only from a binning of the same model that is ready', async () => {
    const elsewhere = await world.modeller.model('Cards');
    for (const fromBinningId of [randomUUID(), world.binning.id]) {
      const model = fromBinningId === world.binning.id ? elsewhere : world.modelId;
      const { body } = await world.modeller
        .post(`/api/models/${model}/binnings`)
        .send({ definitionId: world.definitionId, name: 'x', fromBinningId })
        .expect(422);
      expect(JSON.stringify(body.problems)).toMatch(/no-such-(binning|definition)/);
    }
  });
});
