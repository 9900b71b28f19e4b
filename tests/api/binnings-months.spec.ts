import { randomUUID } from 'node:crypto';
import type { CharacteristicMonths, MonthCounts } from '@tallystone/contracts/binnings/months';
import type { Run } from '@tallystone/contracts/runs/schema';
import { addCut, monthlyDrift, readBench } from '@tallystone/numeric/bench';
import { Pool } from 'pg';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { rows } from '../../server/src/database/sql';
import { applicantsWithRisk, benchOf, characteristicsOf } from '../support/binned';
import { type BinningWorld, numeric, sent, startBinningWorld } from '../support/binning-world';
import { heldRuns } from '../support/held-runs';

let world: BinningWorld;
let owner: Pool;
const csv = applicantsWithRisk();

beforeAll(async () => {
  world = await startBinningWorld(csv, { handlers: heldRuns.handlers });
  owner = new Pool({ connectionString: world.server.database.ownerUrl });
}, 120_000);
afterAll(async () => {
  await owner.end();
  await world.server.stop();
});

const monthsOf = async (path: string): Promise<CharacteristicMonths> =>
  (await world.modeller.get(`${path}/months`).expect(200)).body as CharacteristicMonths;
const summed = (months: readonly MonthCounts[], side: 'rows' | 'goods' | 'bads'): number[] =>
  months.reduce<number[]>((sums, month) => month[side].map((value, slot) => value + (sums[slot] ?? 0)), []);

describe('the bins by month of application', () => {
  it('parts the counts of the fine classes by month, none lost, none twice', async () => {
    for (const column of ['utilisation', 'home']) {
      const { path, detail } = await benchOf(world.modeller, world.binning.id, column);
      const months = await monthsOf(path);
      expect(months).toMatchObject({ dateColumn: 'applied_on', undated: 0, outOfTime: null });
      for (const part of ['development', 'holdOut'] as const) {
        const names = months[part].map(({ month }) => month);
        expect(names).toEqual([...new Set(names)].sort());
        for (const side of ['rows', 'goods', 'bads'] as const)
          expect(summed(months[part], side)).toEqual(detail.fine[part][side]);
      }
      // Out-of-time begins in 2025: none of its months is told before it is opened.
      expect(months.development.at(-1)?.month).toBe('2024-12');
    }
  });

  it('counts in each month the rows of the file', async () => {
    const { path, detail } = await benchOf(world.modeller, world.binning.id, 'home');
    const months = await monthsOf(path);
    const owner = detail.fine.categories.indexOf('owner');
    const lines = csv
      .trim()
      .split('\n')
      .slice(1)
      .map((line) => line.split(','));
    for (const month of ['2023-01', '2024-07']) {
      const inMonth = lines.filter((cells) => cells[1].startsWith(month) && cells[4] === 'owner');
      const of = (side: 'rows' | 'bads'): number =>
        (['development', 'holdOut'] as const).reduce(
          (sum, part) => sum + (months[part].find((one) => one.month === month)?.[side][owner] ?? 0),
          0,
        );
      expect([of('rows'), of('bads')]).toEqual([inMonth.length, inMonth.filter((cells) => cells[8] === '1').length]);
      expect(inMonth.length).toBeGreaterThan(5);
    }
  });

  it('says in the list how far WOE moves, and anew with every edit', async () => {
    const listed = async () =>
      (await characteristicsOf(world.modeller, world.binning.id)).characteristics.find(({ column }) => column === 'utilisation')!;
    const { path, etag, detail } = await benchOf(world.modeller, world.binning.id, 'utilisation');
    const months = await monthsOf(path);
    expect((await listed()).stability.byMonth).toBe(monthlyDrift(detail.fine, detail.current, months)!.deviation);
    const bins = numeric(detail);
    const edit = sent(
      bins,
      addCut(
        detail.fine,
        bins,
        detail.fine.edges.find((edge) => !bins.edges.includes(edge))!,
      ),
    );
    await world.modeller
      .put(path)
      .set('If-Match', etag)
      .send({ bins: edit.after, edits: [edit] })
      .expect(200);
    expect((await listed()).stability.byMonth).toBe(monthlyDrift(detail.fine, edit.after, months)!.deviation);
  });

  it('follows a fine class that is split', async () => {
    const { path, detail } = await benchOf(world.modeller, world.binning.id, 'age');
    const edge = detail.fine.edges[3] + 0.5;
    await world.modeller.post(`${path}/fine-edges`).send({ edge }).expect(200);
    const now = await benchOf(world.modeller, world.binning.id, 'age');
    expect(now.detail.fine.edges).toHaveLength(detail.fine.edges.length + 1);
    expect(summed((await monthsOf(path)).development, 'rows')).toEqual(now.detail.fine.development.rows);
  });

  it('is for those who may read the binning', async () => {
    const { path } = await benchOf(world.modeller, world.binning.id, 'age');
    await world.validator.get(`${path}/months`).expect(200);
    await world.stranger.get(`${path}/months`).expect(404);
    await world.modeller.get(`/api/binnings/${world.binning.id}/characteristics/${randomUUID()}/months`).expect(404);
  });
});

describe('a binning from before some of its figures were introduced', () => {
  it('has them after the first who reads it, with its revisions as they were', async () => {
    const { sequelize } = world.server.context;
    const before = (await characteristicsOf(world.modeller, world.binning.id)).characteristics;
    // As an earlier release left it: no interval, no CSI, no months.
    await rows(
      sequelize,
      `UPDATE binning_characteristics SET out_of_time_csi = NULL,
         summary = summary - 'informationValueLower' - 'informationValueUpper' - 'csiHoldOut' - 'monthlyDrift' WHERE binning_id = $1 RETURNING id`,
      [world.binning.id],
    );
    await owner.query('DELETE FROM binning_months');
    const started = async (): Promise<string> => {
      await characteristicsOf(world.modeller, world.binning.id);
      const found = await rows<{ id: string }>(
        sequelize,
        `SELECT id FROM runs WHERE kind = 'binning.complete' AND singleton = $1`,
        [world.binning.id],
      );
      expect(found).toHaveLength(1);
      return found[0].id;
    };
    const runId = await heldRuns.while(started, async () => {
      // A bench that is opened before the run is through counts its own months.
      const { path, detail } = await benchOf(world.modeller, world.binning.id, 'home');
      expect(summed((await monthsOf(path)).development, 'bads')).toEqual(detail.fine.development.bads);
      expect((await owner.query('SELECT 1 FROM binning_months')).rowCount).toBe(1);
      const old = (await characteristicsOf(world.validator, world.binning.id)).characteristics;
      expect(old[1]).toMatchObject({ informationValueLower: null, stability: { holdOut: null, byMonth: null } });
    });
    const run: Run = await world.validator.ended(runId);
    expect([run.state, run.result]).toEqual(['succeeded', { binningId: world.binning.id, characteristics: before.length }]);
    expect((await characteristicsOf(world.modeller, world.binning.id)).characteristics).toEqual(before);
    expect(before.filter(({ informationValueLower }) => informationValueLower === null)).toEqual([]);
    // Nothing is left to do, so that the next reader starts nothing.
    await characteristicsOf(world.modeller, world.binning.id);
    expect(await rows(sequelize, `SELECT id FROM runs WHERE kind = 'binning.complete'`)).toHaveLength(1);
  });

  it('shows months that were opened with out-of-time, once it is opened', async () => {
    const { path, detail } = await benchOf(world.modeller, world.binning.id, 'utilisation');
    await world.modeller
      .post(`/api/sample-definitions/${world.definitionId}/out-of-time`)
      .send({ reason: 'The bins are settled and a last check is due' })
      .expect(201);
    const months = await monthsOf(path);
    expect(months.outOfTime?.map(({ month }) => month)).toContain('2025-03');
    const opened = await benchOf(world.modeller, world.binning.id, 'utilisation');
    expect(summed(months.outOfTime ?? [], 'goods')).toEqual(opened.detail.fine.outOfTime?.goods);
    expect(readBench(opened.detail.fine, detail.current).stability.outOfTime).toBe(opened.detail.stability.outOfTime);
  });
});
