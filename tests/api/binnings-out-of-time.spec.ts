import type { Binning } from '@tallystone/contracts/binnings/schema';
import { openingWords } from '@tallystone/contracts/out-of-time/opening-words';
import type { OutOfTimeCover } from '@tallystone/contracts/out-of-time/schema';
import { readBench } from '@tallystone/numeric/bench';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { applicantsWithRisk, benchOf, defineApplicants } from '../support/binned';
import { type BinningWorld, recordOf, startBinningWorld } from '../support/binning-world';
import type { IntakeServer, Visitor } from '../support/intake';

let world: BinningWorld;
let server: IntakeServer;
let modeller: Visitor;
let colleague: Visitor;
let stranger: Visitor;
let validator: Visitor;
let definitionId: string;
let binning: Binning;

beforeAll(async () => {
  world = await startBinningWorld();
  ({ server, modeller, colleague, stranger, validator, definitionId, binning } = world);
}, 120_000);
afterAll(() => server.stop());

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
    const record = await recordOf(world, definitionId);
    expect(record.filter(({ action }) => action === 'out-of-time.opened')).toHaveLength(4);
    await expect(server.context.sequelize.query('DELETE FROM out_of_time_openings')).rejects.toThrow(/permission denied/);
  });

  it('counts for another definition of the same rows, and lifts the cover of its own alone', async () => {
    const path = `/api/models/${world.modelId}/samples/${world.sampleId}`;
    const { body: draft } = await modeller.get(`${path}/draft`).expect(200);
    const started = await modeller.post(`${path}/definitions`).send({ revision: draft.revision as number }).expect(202);
    const second = ((await modeller.ended(started.body.id as string)).result as { definitionId: string }).definitionId;
    const secondUrl = `/api/sample-definitions/${second}/out-of-time`;
    const cover = (await modeller.get(secondUrl).expect(200)).body as OutOfTimeCover;
    expect(cover).toMatchObject({ state: 'covered', abilities: ['open'] });
    expect(cover.openings.map(({ under, sample, definition, definitionId: of }) => [under, sample, definition, of])).toEqual(
      Array.from({ length: 4 }, () => ['earlier', 1, 1, definitionId]),
    );
    expect(openingWords(cover.openings)).toBe('opened 4 times, all of them under an earlier definition');
    const opened = (await colleague.post(secondUrl).send({ reason: 'The second definition is settled too' }).expect(201)).body as OutOfTimeCover;
    expect(openingWords(opened.openings)).toBe('opened 5 times, 4 of them under an earlier definition');
    expect((await recordOf(world, second)).find(({ action }) => action === 'out-of-time.opened')).toMatchObject({ detail: { earlier: 4 } });
    // Under the first one it is a later look, and the binning says so.
    const first = (await modeller.get(url()).expect(200)).body as OutOfTimeCover;
    expect(first.openings.map(({ under }) => under)).toEqual(['this', 'this', 'this', 'this', 'later']);
    expect((await modeller.get(`/api/binnings/${binning.id}`)).body.outOfTimeOpenings).toBe('opened 5 times, 1 of them under another definition');
    // Another file has rows of its own.
    const other = await defineApplicants(modeller, world.modelId, applicantsWithRisk(600));
    expect((await modeller.get(`/api/sample-definitions/${other.definitionId}/out-of-time`).expect(200)).body).toMatchObject({ state: 'covered', openings: [] });
  }, 60_000);
});
