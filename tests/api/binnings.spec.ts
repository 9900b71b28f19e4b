import { randomUUID } from 'node:crypto';
import type { Binning } from '@tallystone/contracts/binnings/schema';
import type { BinnedCharacteristic } from '@tallystone/contracts/specification/types';
import { parseSpecification } from '@tallystone/contracts/specification/schema';
import { readBench } from '@tallystone/numeric/bench';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { codeCharacteristics } from '../../server/src/replay/coding';
import { DEVELOPMENT, GOOD, BAD } from '../../server/src/replay/types';
import { binningCharacteristics } from '../../server/src/services/binnings/characteristics-of';
import { loadCodes } from '../../server/src/services/binnings/load-codes';
import { findDefinition, loadPrepared } from '../../server/src/services/samples/definitions';
import { openSample } from '../../server/src/storage/columnStore';
import { benchOf, characteristicsOf } from '../support/binned';
import { type BinningWorld, numeric, startBinningWorld } from '../support/binning-world';
import type { IntakeServer, Visitor } from '../support/intake';

let world: BinningWorld;
let server: IntakeServer;
let modeller: Visitor;
let stranger: Visitor;
let validator: Visitor;
let modelId: string;
let definitionId: string;
let binning: Binning;

beforeAll(async () => {
  world = await startBinningWorld();
  ({ server, modeller, stranger, validator, modelId, definitionId, binning } = world);
}, 120_000);
afterAll(() => server.stop());

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
    expect(binning.barred).toEqual([{ column: 'gender', reason: expect.stringContaining('until somebody with the role of compliance permits it') as string }]);
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
    const [{ count }] = (
      await sequelize.query(
        `SELECT count(*)::int AS count FROM binning_codes k JOIN binning_characteristics c ON c.id = k.characteristic_id WHERE c.binning_id = '${binning.id}' AND c.included`,
      )
    )[0] as { count: number }[];
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
});
