import type { CorrelationStanding, Correlations } from '@tallystone/contracts/binnings/correlations';
import type { CharacteristicList } from '@tallystone/contracts/binnings/schema';
import {
  benchStability,
  edgeBeside,
  groupCategories,
  moveCut,
  moveMissing,
  readBench,
  readingInterval,
} from '@tallystone/numeric/bench';
import { correlation, varianceInflation } from '@tallystone/numeric/diagnostics/collinearity';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { BAD, DEVELOPMENT, GOOD } from '../../server/src/replay/types';
import { loadCodes } from '../../server/src/services/binnings/load-codes';
import { loadPrepared } from '../../server/src/services/samples/definitions';
import { applicantsWithRisk, benchOf, characteristicsOf } from '../support/binned';
import { type BinningWorld, numeric, sent, startBinningWorld } from '../support/binning-world';

let world: BinningWorld;

/** The invented applicants with one more column: roughly the age in months, which says nearly what age says. */
function withTwin(): string {
  const [head, ...rows] = applicantsWithRisk().trimEnd().split('\n');
  const place = head.split(',').indexOf('age');
  const twin = (row: string, index: number): string => {
    const cells = row.split(',');
    // Takes the place of the branch, which tells nobody apart.
    cells[6] = cells[place] === '' ? '' : String(Number(cells[place]) * 12 + ((index * 37) % 60));
    return cells.join(',');
  };
  return `${head}\n${rows.map(twin).join('\n')}\n`;
}

beforeAll(async () => {
  world = await startBinningWorld(withTwin());
}, 120_000);
afterAll(() => world.server.stop());

const read = async (): Promise<Correlations> =>
  (await world.modeller.get(`/api/binnings/${world.binning.id}/correlations`).expect(200)).body as Correlations;

/** What the list says of them; the page of correlations must say the same. */
async function standing(): Promise<CorrelationStanding> {
  const { correlations } = await characteristicsOf(world.modeller, world.binning.id);
  expect(await read()).toMatchObject(correlations);
  return correlations;
}

/** Moves the first cut of a numeric characteristic by one fine class. */
async function moveFirstCut(column: string): Promise<void> {
  const { path, etag, detail } = await benchOf(world.modeller, world.binning.id, column);
  const before = numeric(detail);
  const edit = sent(before, moveCut(detail.fine, before, 0, edgeBeside(detail.fine, before, 0, 1)!));
  await world.modeller
    .put(path)
    .set('If-Match', etag)
    .send({ bins: edit.after, edits: [edit] })
    .expect(200);
}

async function include(column: string, included: boolean, reason = ''): Promise<CharacteristicList> {
  const { characteristics } = await characteristicsOf(world.modeller, world.binning.id);
  const chosen = characteristics.filter((one) => one.column === column).map(({ id, revision }) => ({ id, revision }));
  const { body } = await world.modeller
    .post(`/api/binnings/${world.binning.id}/inclusions`)
    .send({ characteristics: chosen, included, reason })
    .expect(200);
  return body as CharacteristicList;
}

/** The run that classing started, or the one given, has ended. */
async function calculated(): Promise<Correlations> {
  for (;;) {
    const found = await read();
    if (found.runId) await world.modeller.ended(found.runId);
    else if (found.calculatedAt) return found;
  }
}

describe('the list', () => {
  it('says the interval of IV and the CSI that the bench calculates from the same counts', async () => {
    for (const one of (await characteristicsOf(world.modeller, world.binning.id)).characteristics) {
      const { detail } = await benchOf(world.modeller, world.binning.id, one.column);
      const interval = readingInterval(readBench(detail.fine, detail.current));
      expect(one.informationValueLower).toBe(interval?.lower ?? null);
      expect(one.informationValueUpper).toBe(interval?.upper ?? null);
      // How far WOE moves by month is of another table: binnings-months.spec.ts.
      const { byMonth: _byMonth, ...csi } = one.stability;
      expect(csi).toEqual(benchStability(detail.fine, detail.current));
      expect(one.stability.outOfTime).toBeNull();
    }
  });
});

describe('correlations', () => {
  it('are there after classing, of WOE over development rows, with the inflation of the same columns', async () => {
    const found = await calculated();
    const columns = found.characteristics.map(({ column }) => column);
    expect(columns).toEqual(['age', 'utilisation', 'home', 'region', 'branch_code'].filter((column) => columns.includes(column)));
    expect(columns.length).toBeGreaterThanOrEqual(4);
    const { sequelize } = world.server.context;
    const coded = await loadCodes(sequelize, world.binning.id);
    const prepared = await loadPrepared(sequelize, world.definitionId);
    const rows = Array.from({ length: prepared.rows }, (_, row) => row).filter(
      (row) => prepared.partition[row] === DEVELOPMENT && [GOOD, BAD].includes(prepared.outcome[row]),
    );
    const decoded = await Promise.all(
      coded.characteristics.map(async ({ characteristic, codes }) => {
        const { detail } = await benchOf(world.modeller, world.binning.id, characteristic.column);
        const woe = readBench(detail.fine, detail.current).bins.map(({ figures }) => figures.development!.woe ?? 0);
        return Float64Array.from(rows, (row) => woe[codes![row]]);
      }),
    );
    expect(found.rows).toBe(rows.length);
    const expected = correlation(decoded);
    // Sums of some thousand products, in another order.
    found.matrix.forEach((line, j) => line.forEach((value, k) => expect(Math.abs(value! - expected[j][k])).toBeLessThan(1e-12)));
    varianceInflation(decoded).forEach((value, j) => expect(found.characteristics[j].inflation! / value).toBeCloseTo(1, 9));
    expect(found.changed).toEqual([]);
  });

  it('group what says the same, in the list too', async () => {
    const { characteristics } = await characteristicsOf(world.modeller, world.binning.id);
    const groups = Object.fromEntries(characteristics.map(({ column, group }) => [column, group]));
    expect(groups).toMatchObject({ age: 1, branch_code: 1, utilisation: null, home: null });
  });

  it('say what has changed since, and are calculated anew once for all who ask', async () => {
    expect(await standing()).toMatchObject({ changed: [], runId: null });
    await moveFirstCut('age');
    const older = await read();
    expect(older.changed).toEqual(['age']);
    expect(await standing()).toEqual({ calculatedAt: older.calculatedAt, changed: ['age'], runId: null });
    const url = `/api/binnings/${world.binning.id}/correlations`;
    await world.validator.post(url).send({}).expect(403);
    await world.stranger.get(url).expect(404);
    const runs = await Promise.all([0, 1, 2].map(() => world.modeller.post(url).send({}).expect(202)));
    await Promise.all(runs.map(({ body }) => world.modeller.ended((body as { runId: string }).runId)));
    const now = await calculated();
    expect(now.changed).toEqual([]);
    expect(await standing()).toEqual({ calculatedAt: now.calculatedAt, changed: [], runId: null });
    expect(now.matrix[0][1]).not.toBe(older.matrix[0][1]);
    expect((await world.validator.get(url).expect(200)).body.abilities).toEqual([]);
  });

  it('leave out what is left out, without a new calculation', async () => {
    const before = await read();
    const list = await include('branch_code', false, 'Says what age says');
    expect(list.correlations).toEqual({ calculatedAt: before.calculatedAt, changed: [], runId: null });
    const after = await read();
    expect(after.characteristics.map(({ column }) => column)).not.toContain('branch_code');
    expect(after.changed).toEqual([]);
    const inflation = (list: Correlations): number => list.characteristics.find(({ column }) => column === 'age')!.inflation!;
    expect(inflation(before)).toBeGreaterThan(3);
    expect(inflation(after)).toBeLessThan(1.2);
    expect((await characteristicsOf(world.modeller, world.binning.id)).characteristics[0].group).toBeNull();
  });

  it('no longer speak of what was changed while it was left out, once it is taken in', async () => {
    await moveFirstCut('branch_code');
    expect(await standing()).toMatchObject({ changed: [] });
    expect((await include('branch_code', true)).correlations.changed).toEqual(['branch_code']);
    expect(await standing()).toMatchObject({ changed: ['branch_code'] });
    expect((await include('branch_code', false, 'Says what age says')).correlations.changed).toEqual([]);
  });

  it('no longer speak of what was classed anew, which the answer to it says', async () => {
    const { characteristics } = await characteristicsOf(world.modeller, world.binning.id);
    const chosen = characteristics.filter(({ column }) => column === 'home' || column === 'utilisation');
    const { body } = await world.modeller
      .post(`/api/binnings/${world.binning.id}/reclassings`)
      .send({ characteristics: chosen.map(({ id, revision }) => ({ id, revision })), constraints: { mostBins: 2 }, reason: '' })
      .expect(200);
    expect((body as CharacteristicList).correlations.changed).toEqual(['utilisation', 'home']);
    expect(await standing()).toMatchObject({ changed: ['utilisation', 'home'] });
  });

  it('miss nothing of a characteristic that has one bin and varies with nothing', async () => {
    const { path, etag, detail } = await benchOf(world.modeller, world.binning.id, 'region');
    if (detail.current.kind !== 'categorical') throw new Error('Not categorical');
    const together = sent(detail.current, groupCategories(detail.fine, detail.current, detail.fine.categories, 0));
    const whole = sent(together.after, moveMissing(together.after, 0, 'all regions'));
    const { body } = await world.modeller
      .put(path)
      .set('If-Match', etag)
      .send({ bins: whole.after, edits: [together, whole] })
      .expect(200);
    // One bin tells nobody apart, and is left out; somebody can take it in all the same.
    expect(body).toMatchObject({ included: false, bins: 1 });
    await include('region', true, '');
    expect((await standing()).changed).toContain('region');
    const run = await world.modeller.post(`/api/binnings/${world.binning.id}/correlations`).send({}).expect(202);
    await world.modeller.ended((run.body as { runId: string }).runId);
    const now = await calculated();
    expect(now.characteristics.map(({ column }) => column)).not.toContain('region');
    expect(await standing()).toEqual({ calculatedAt: now.calculatedAt, changed: [], runId: null });
  });
});
