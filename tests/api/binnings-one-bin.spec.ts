import type { Binning, CharacteristicSummary } from '@tallystone/contracts/binnings/schema';
import { mergeNumeric } from '@tallystone/numeric/bench';
import { Client } from 'pg';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { inclusionDecided } from '../../server/src/migrations/0212-inclusion-decided';
import { applicantsWithRisk, benchOf, characteristicsOf, classApplicants, defineApplicants } from '../support/binned';
import { type BinningWorld, numeric, recordOf, sent, startBinningWorld } from '../support/binning-world';

const oneBin = 'Every development row lies in one bin: it tells nobody apart.';
/** WOE of no two bins differs by as much, so that every value and every category comes into one bin. */
const coarse = { smallestDifference: 4, trend: 'any' };
const usual = { smallestDifference: 0.05, trend: 'any' };
const reason = 'To look';
let world: BinningWorld;
let first: Binning;

/** Every age and every home is known, as a missing one has a bin of its own. */
function known(rows: number): string {
  const [head, ...lines] = applicantsWithRisk(rows).trimEnd().split('\n');
  const filled = lines.map((line) => {
    const [id, day, age, utilisation, home, ...rest] = line.split(',');
    return [id, day, age || '40', utilisation, home || 'rent', ...rest].join(',');
  });
  return `${[head, ...filled].join('\n')}\n`;
}

async function find(column: string, of = first): Promise<CharacteristicSummary> {
  const found = (await characteristicsOf(world.modeller, of.id)).characteristics.find((one) => one.column === column);
  if (!found) throw new Error(`No characteristic ${column}`);
  return found;
}
const standing = async (column: string, of = first) => {
  const { included, leftOutReason } = await find(column, of);
  return { included, leftOutReason };
};
const isOneBin = async (column: string, of = first): Promise<boolean> =>
  (await find(column, of)).warnings.some(({ code }) => code === 'one-bin');
const included = { included: true, leftOutReason: '' };
const leftOut = { included: false, leftOutReason: oneBin };

async function reclass(columns: string[], constraints: object, of = first): Promise<void> {
  const characteristics = await Promise.all(columns.map((column) => find(column, of)));
  await world.modeller
    .post(`/api/binnings/${of.id}/reclassings`)
    .send({ characteristics: characteristics.map(({ id, revision }) => ({ id, revision })), constraints, reason })
    .expect(200);
}
async function setIncluded(column: string, to: boolean, of = first): Promise<void> {
  const { id, revision } = await find(column, of);
  await world.modeller
    .post(`/api/binnings/${of.id}/inclusions`)
    .send({ characteristics: [{ id, revision }], included: to, ...(to ? {} : { reason: 'Not known at application' }) })
    .expect(200);
}
async function startFrom(binning: Binning, name: string): Promise<Binning> {
  const { modeller, modelId } = world;
  const { definitionId } = await defineApplicants(modeller, modelId, known(4000));
  const started = await modeller
    .post(`/api/models/${modelId}/binnings`)
    .send({ definitionId, name, fromBinningId: binning.id })
    .expect(201);
  expect((await modeller.ended(started.body.runId as string)).state).toBe('succeeded');
  return (await modeller.get(`/api/binnings/${started.body.id}`).expect(200)).body as Binning;
}

beforeAll(async () => {
  world = await startBinningWorld(known(3000));
  first = await classApplicants(world.modeller, world.modelId, world.definitionId, coarse);
}, 240_000);
afterAll(() => world.server.stop());

describe('a characteristic whose development rows lie in one bin', () => {
  it('is left out when it is classed, and taken in when it is classed anew into more', async () => {
    expect(await standing('age')).toEqual(leftOut);
    await reclass(['age'], usual);
    expect(await isOneBin('age')).toBe(false);
    expect(await standing('age')).toEqual(included);
    const [taken, classed] = await recordOf(world, (await find('age')).id);
    expect(classed).toMatchObject({ action: 'binning.reclassed' });
    expect(taken).toMatchObject({ action: 'binning.taken-in', actorName: 'marian', detail: { column: 'age', automatic: true } });
    await reclass(['age'], coarse);
    expect(await standing('age')).toEqual(leftOut);
    expect((await recordOf(world, (await find('age')).id))[0]).toMatchObject({
      action: 'binning.left-out',
      reason: oneBin,
      detail: { automatic: true },
    });
  });

  it('comes in and goes out with the others that a run classes anew', async () => {
    const { modeller, modelId, definitionId } = world;
    const many = await classApplicants(modeller, modelId, definitionId, coarse);
    for (const [constraints, expected] of [
      [usual, included],
      [coarse, leftOut],
    ] as const) {
      const characteristics = await Promise.all(['age', 'home'].map((column) => find(column, many)));
      const started = await modeller
        .post(`/api/binnings/${many.id}/reclassing-runs`)
        .set('Idempotency-Key', `many-${expected.included}`)
        .send({ characteristics: characteristics.map(({ id, revision }) => ({ id, revision })), constraints, reason })
        .expect(202);
      expect((await modeller.ended(started.body.runId as string)).state).toBe('succeeded');
      expect(await standing('age', many)).toEqual(expected);
      expect(await standing('home', many)).toEqual(expected);
    }
  });

  it('goes out by an edit that leaves one bin, and comes in by its undoing', async () => {
    await reclass(['age'], { ...usual, mostBins: 2 });
    const { path, etag, detail } = await benchOf(world.modeller, first.id, 'age');
    const bins = numeric(detail);
    expect(bins.edges).toHaveLength(1);
    const merged = sent(bins, mergeNumeric(detail.fine, bins, 0));
    const saved = await world.modeller
      .put(path)
      .set('If-Match', etag)
      .send({ bins: merged.after, edits: [merged] })
      .expect(200);
    expect(saved.body).toMatchObject(leftOut);
    const undone = await world.modeller.put(path).set('If-Match', saved.headers.etag).send({ bins, edits: [] }).expect(200);
    expect(undone.body).toMatchObject(included);
    expect((await recordOf(world, detail.id)).slice(0, 4).map(({ action }) => action)).toEqual([
      'binning.taken-in',
      'binning.edit-undone',
      'binning.left-out',
      'binning.edited',
    ]);
  });

  it('stays as a person decided, whatever becomes of its bins', async () => {
    // Taken in although it is one bin.
    expect(await standing('home')).toEqual(leftOut);
    await setIncluded('home', true);
    await reclass(['home'], { ...coarse, mostBins: 5 });
    expect(await isOneBin('home')).toBe(true);
    expect(await standing('home')).toEqual(included);
    // Left out by a person, who need not be asked again after classing anew.
    await setIncluded('age', false);
    const decided = { included: false, leftOutReason: 'Not known at application' };
    await reclass(['age'], coarse);
    expect(await standing('age')).toEqual(decided);
    await reclass(['age'], usual);
    expect(await standing('age')).toEqual(decided);
    // Taken in again where it is more than one bin, it goes with its bins again.
    await setIncluded('age', true);
    await reclass(['age'], coarse);
    expect(await standing('age')).toEqual(leftOut);
    // A person can also say so of what went out by itself.
    await setIncluded('age', false);
    await reclass(['age'], usual);
    expect(await standing('age')).toEqual(decided);
    await setIncluded('age', true);
  });
});

describe('on new data', () => {
  it('what was one bin is judged by its bins there, and what a person decided is carried over', async () => {
    const { modeller, modelId, definitionId } = world;
    const from = await classApplicants(modeller, modelId, definitionId, usual);
    const rows = await characteristicsOf(modeller, from.id);
    expect(rows.characteristics.map(({ column, included: taken }) => [column, taken])).toEqual([
      ['age', true],
      ['utilisation', true],
      ['home', true],
      ['region', true],
      ['branch_code', false],
    ]);
    // One branch there; two branches whose rows differ on the new data.
    await setIncluded('region', false, from);
    await reclass(['home'], coarse, from);
    expect(await standing('home', from)).toEqual(leftOut);
    await setIncluded('home', true, from);
    let bads = 0;
    // Every good and every third bad among the women.
    const csv = known(4000).replace(
      /,B1,f,([01])\n/g,
      (_, bad: string) => `,${bad === '0' || bads++ % 3 === 0 ? 'B2' : 'B1'},f,${bad}\n`,
    );
    const { definitionId: other } = await defineApplicants(modeller, modelId, csv);
    const started = await modeller
      .post(`/api/models/${modelId}/binnings`)
      .send({ definitionId: other, name: 'With two branches', fromBinningId: from.id })
      .expect(201);
    expect((await modeller.ended(started.body.runId as string)).state).toBe('succeeded');
    const now = { id: started.body.id as string } as Binning;
    expect(await isOneBin('branch_code', now)).toBe(false);
    expect(await standing('branch_code', now)).toEqual(included);
    expect(await standing('region', now)).toEqual({ included: false, leftOutReason: 'Not known at application' });
    expect(await isOneBin('home', now)).toBe(true);
    expect(await standing('home', now)).toEqual(included);
  });

  it('says nothing of what was left out by itself where the column is not there', async () => {
    const { modeller, modelId, definitionId } = world;
    const from = await classApplicants(modeller, modelId, definitionId, usual);
    await setIncluded('region', false, from);
    const lines = known(3000).trimEnd().split('\n').map((line) => {
      const [id, day, age, utilisation, home, , , gender, bad] = line.split(',');
      return [id, day, age, utilisation, home, gender, bad].join(',');
    }); // prettier-ignore
    const { definitionId: fewer } = await defineApplicants(modeller, modelId, `${lines.join('\n')}\n`);
    const started = await modeller
      .post(`/api/models/${modelId}/binnings`)
      .send({ definitionId: fewer, name: 'On fewer columns', fromBinningId: from.id })
      .expect(201);
    expect((await modeller.ended(started.body.runId as string)).state).toBe('succeeded');
    const { from: earlier } = (await modeller.get(`/api/binnings/${started.body.id}`).expect(200)).body as Binning;
    expect(earlier?.notHere.map(({ column }) => column)).toEqual(['region']);
  });

  it('comes in from a binning of before, which is told by its sentence', async () => {
    const { modeller, modelId, definitionId, server } = world;
    const from = await classApplicants(modeller, modelId, definitionId, usual);
    await setIncluded('region', false, from);
    await reclass(['home'], coarse, from);
    await setIncluded('home', true, from);
    // As such a binning was left: bins of more than one, and the sentence about one.
    const owner = new Client({ connectionString: server.database.ownerUrl });
    await owner.connect();
    try {
      await owner.query('ALTER TABLE binning_characteristics DROP COLUMN inclusion_decided');
      await owner.query('UPDATE binning_characteristics SET included = false, left_out_reason = $2 WHERE binning_id = $1 AND column_name = $3', [from.id, oneBin, 'age']); // prettier-ignore
      await inclusionDecided.up({
        sql: async (text) => (await owner.query<Record<string, unknown>>(text)).rows,
        app: '',
        transaction: null,
      });
    } finally {
      await owner.end();
    }
    const now = await startFrom(from, 'From before');
    expect(await standing('age', now)).toEqual(included);
    expect(await standing('region', now)).toEqual({ included: false, leftOutReason: 'Not known at application' });
    expect(await standing('home', now)).toEqual(included);
    // There, too, it comes in once it is classed anew.
    await reclass(['age'], usual, from);
    expect(await standing('age', from)).toEqual(included);
  });
});
