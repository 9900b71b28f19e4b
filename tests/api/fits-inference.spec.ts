import type { Comparison } from '@tallystone/contracts/comparison/schema';
import type { Fit, FitPath } from '@tallystone/contracts/fits/schema';
import { execFileSync } from 'node:child_process';
import type { PartitionBalance } from '@tallystone/contracts/samples/balance';
import type { Definition, DraftContent } from '@tallystone/contracts/samples/definition';
import type { ColumnQualityDetail, QualityState } from '@tallystone/contracts/samples/quality';
import type { Result } from '@tallystone/contracts/result/types';
import type { Specification } from '@tallystone/contracts/specification/types';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { loadPrepared } from '../../server/src/services/samples/definitions';
import { openSample } from '../../server/src/storage/columnStore';
import { classApplicants } from '../support/binned';
import { IntakeServer, type Visitor } from '../support/intake';
import { choose, fitPath, freeze, makeDocument, scale } from '../support/line';

/** What the roles of a sample's columns do to its fits: weight, decision, group key, incumbent score, segment. One sample, three fits. */
let server: IntakeServer;
let modeller: Visitor;
let other: Visitor;
let modelId: string;
let sampleId: string;
let samplePath: string;
let definitionId: string;
let binningId: string;
let plain: Fit;
let corrected: { versionId: string; shift: number; sampleBadRate: number };

/** Invented: risk falls with age, rises with utilisation; a fifth is declined, the riskier the more often; two rows to a household. */
function applicants(): string {
  let state = 7;
  const random = (): number => (state = (state * 48271) % 2147483647) / 2147483647;
  const lines = ['applied_on,age,utilisation,household_no,weight,incumbent_score,segment,decision,bad'];
  for (let row = 0; row < 2400; row++) {
    const age = 18 + Math.floor(random() * 50);
    const utilisation = Math.round(random() * 100);
    const eta = 1 + 0.04 * (age - 42) - 0.03 * (utilisation - 50);
    const declined = random() < 0.35 / (1 + Math.exp(eta - 1));
    const bad = random() < 1 / (1 + Math.exp(eta)) ? 1 : 0;
    const score = Math.round(500 + 30 * eta + 60 * (random() - 0.5));
    lines.push(
      [
        `2024-${String(1 + (row % 12)).padStart(2, '0')}-10`,
        age,
        utilisation,
        `h${Math.floor(row / 2)}`,
        1 + (row % 2),
        row % 40 === 0 ? '' : score,
        row % 50 === 0 ? 'pilot' : row % 3 === 0 ? 'web' : 'branch',
        declined ? 'declined' : 'accepted',
        declined ? '' : row % 37 === 0 ? 'open' : bad,
      ].join(','),
    );
  }
  return `${lines.join('\n')}\n`;
}

const folds = { count: 3, seed: 1, classing: 'woe' };
const lambda = { count: 12, smallestRatio: 0.001, earlyStop: false };
const pathOf = async (id: string): Promise<FitPath> => (await modeller.get(`/api/fits/${id}/path`).expect(200)).body as FitPath;

beforeAll(async () => {
  server = await IntakeServer.start();
  modeller = await server.signIn('marian', 'modeller');
  other = await server.signIn('oswin', 'modeller');
  modelId = await modeller.model();
  const sample = await modeller.sample(modelId, applicants());
  sampleId = sample.id;
  const { body, headers } = await modeller.get(`${sample.path}/draft`).expect(200);
  const entries = [
    { column: 'age', label: 'Age when applying', unit: 'years', description: 'In whole years.', treatments: [] },
    { column: 'segment', label: 'Way in', unit: '', description: 'How the application came.', treatments: [] },
  ];
  await modeller.put(`${sample.path}/dictionary`).set('If-Match', '"0"').send({ entries }).expect(200);
  samplePath = sample.path;
  const roles: Record<string, DraftContent['columns'][number]['role']> = {
    household_no: 'group key',
    weight: 'weight',
    incumbent_score: 'incumbent score',
    segment: 'segment',
    decision: 'decision',
    bad: 'outcome',
    applied_on: 'application date',
  };
  const draft = body.content as DraftContent;
  const content: DraftContent = {
    ...draft,
    columns: draft.columns.map((column) => ({ ...column, role: roles[column.column] ?? 'characteristic' })),
    outcome: { good: ['0'], bad: ['1'], indeterminate: ['open'], excluded: [] },
    declined: { values: ['declined'] },
    partition: { by: 'seed', seed: 3, holdOutShare: 0.3, outOfTime: null },
  };
  const saved = await modeller.put(`${sample.path}/draft`).set('If-Match', headers.etag).send(content).expect(200);
  expect(saved.body.problems).toEqual([]);
  const started = await modeller.post(`${sample.path}/definitions`).send({ revision: saved.body.revision as number }).expect(202);
  const run = await modeller.ended(started.body.id as string);
  expect(run.problem).toBeNull();
  definitionId = (run.result as { definitionId: string }).definitionId;
  const quality = (await modeller.get(`${sample.path}/quality`).expect(200)).body as QualityState;
  if (quality.runId) await modeller.ended(quality.runId);
  binningId = (await classApplicants(modeller, modelId, definitionId)).id;
  plain = await fitPath(modeller, modelId, binningId, { name: 'Plain', folds, lambda });
}, 120_000);
afterAll(() => server.stop());

const specificationOf = async (fitId: string): Promise<Specification> => {
  const [[row]] = (await server.context.sequelize.query(`SELECT specification FROM fits WHERE id = '${fitId}'`)) as unknown as [{ specification: string }[]];
  return JSON.parse(row.specification) as Specification;
};

const thin = (count: number): string => String(count).replace(/\B(?=(\d{3})+$)/g, ' ');

/** The text of a version's document with any run of white space made one blank (poppler's pdftotext, an independent reader). */
async function documentWords(versionId: string): Promise<string> {
  const { documentId } = await makeDocument(modeller, versionId);
  const response = await modeller.get(`/api/documents/${documentId}/file`).buffer(true).parse((incoming, done) => {
    const chunks: Buffer[] = [];
    incoming.on('data', (chunk: Buffer) => chunks.push(chunk));
    incoming.on('end', () => done(null, Buffer.concat(chunks)));
  });
  expect(response.status).toBe(200);
  return execFileSync('pdftotext', ['-layout', '-', '-'], { input: response.body as Buffer, encoding: 'utf8', maxBuffer: 1 << 26 }).replace(/\s+/g, ' ');
}

describe('what a fit can draw on', () => {
  it('is told to whoever sees the model, and to nobody else', async () => {
    const { body } = await modeller.get(`/api/sample-definitions/${definitionId}/fit-basis`).expect(200);
    expect(body).toMatchObject({ definitionId, weight: 'weight', groupKey: 'household_no', declined: { column: 'decision', values: ['declined'] } });
    expect(body.declined.rows).toBeGreaterThan(100);
    await other.get(`/api/sample-definitions/${definitionId}/fit-basis`).expect(404);
  });
});

describe('the group key', () => {
  it('keeps a household in one partition and one fold', async () => {
    const specification = await specificationOf(plain.id);
    expect(specification.partition).toMatchObject({ groups: 'household_no' });
    expect(specification.fit.folds).toMatchObject({ groups: 'household_no' });
    const { partition } = await loadPrepared(server.context.sequelize, definitionId);
    const column = (await openSample(server.context.sequelize, sampleId, ['household_no'])).column('household_no');
    if (column?.kind !== 'texts') throw new Error('Households are texts');
    const seen = new Map<number, Set<number>>();
    column.codes.forEach((code, row) => seen.set(code, (seen.get(code) ?? new Set()).add(partition[row])));
    expect(seen.size).toBe(1200);
    expect([...seen.values()].every((partitions) => partitions.size === 1)).toBe(true);
    expect([...seen.values()].filter((partitions) => partitions.has(2)).length).toBeGreaterThan(300);
  });
});

describe('a prior correction', () => {
  it('moves every intercept by the stated log odds, and nothing that ranks', async () => {
    const before = await pathOf(plain.id);
    expect(before.priorCorrection).toBeNull();
    const settings = { name: 'Corrected', folds, lambda };
    const refused = await modeller.post(`/api/models/${modelId}/fits`).send({ binningId, settings: { ...settings, priorCorrection: { populationBadRate: 1, reason: '' } } }).expect(422);
    expect((refused.body.problems as unknown[]).length).toBe(2);
    const fit = await fitPath(modeller, modelId, binningId, { ...settings, priorCorrection: { populationBadRate: 0.04, reason: 'Portfolio of 2024' } });
    expect(fit.settings.priorCorrection).toEqual({ populationBadRate: 0.04, reason: 'Portfolio of 2024' });
    const after = await pathOf(fit.id);
    const { sampleBadRate, shift } = after.priorCorrection ?? { sampleBadRate: NaN, shift: NaN };
    // King and Zeng 2001: ln{[(1 - t) / t] [y / (1 - y)]}, with the weighted bad rate y that an intercept alone fits.
    expect(shift).toBeCloseTo(Math.log(((1 - 0.04) / 0.04) * (sampleBadRate / (1 - sampleBadRate))), 12);
    expect(before.intercepts[0]).toBeCloseTo(Math.log((1 - sampleBadRate) / sampleBadRate), 8);
    after.intercepts.forEach((intercept, index) => expect(intercept).toBeCloseTo(before.intercepts[index] + shift, 12));
    expect(after.coefficients).toEqual(before.coefficients);
    expect(after.holdOut.map((metrics) => metrics?.auc)).toEqual(before.holdOut.map((metrics) => metrics?.auc));
    // The scorecard, the frozen version and its replay have the same corrected intercept.
    await choose(modeller, fit.id, { index: after.crossValidation.oneStandardError, rule: 'one-standard-error' });
    const scorecard = await scale(modeller, fit.id);
    expect(scorecard.intercept).toBe(after.intercepts[after.crossValidation.oneStandardError]);
    const version = await freeze(modeller, modelId, fit.id);
    const result = (await modeller.get(`/api/versions/${version.id}/result`).expect(200)).body as Result;
    expect(result.intercept).toBeCloseTo(scorecard.intercept, 12);
    expect(result.basePoints).toBeCloseTo(scorecard.basePoints, 9);
    expect(result.weightedMetrics).not.toBeNull();
    corrected = { versionId: version.id, shift, sampleBadRate };
  }, 120_000);
});

describe('the fit with indeterminates as good and as bad', () => {
  it('stands at the penalties of both rules, of the whole definition’s development, and tells nothing of out-of-time', async () => {
    const { outcomeRefits: refits, crossValidation, kept, lambdas, holdOut } = await pathOf(plain.id);
    expect(refits?.at.map(({ index }) => index)).toEqual([...new Set([crossValidation.oneStandardError, crossValidation.minimum])].sort((a, b) => a - b));
    const { body } = await modeller.get(`${samplePath}/definitions/${definitionId}`).expect(200);
    const { development, holdOut: held } = (body as Definition).counts.partitions;
    expect(development.indeterminates).toBeGreaterThan(10);
    expect(refits).toMatchObject({ partition: 'holdOut', rows: held.goods + held.bads, approvalRate: null });
    for (const { index, lambda, cases } of refits?.at ?? []) {
      expect(lambda).toBe(lambdas[index]);
      const { goods, bads, indeterminates } = development;
      expect(cases.map((one) => [one.indeterminates, one.goods, one.bads])).toEqual([
        ['as they are', goods, bads],
        ['as good', goods + indeterminates, bads],
        ['as bad', goods, bads + indeterminates],
      ]);
      expect(cases[0]).toMatchObject({ kept: kept[index], rankCorrelation: 1, decisionsChanged: null });
      expect(cases[0].gini).toBeCloseTo(2 * (holdOut[index]?.auc ?? NaN) - 1, 12);
    }
  });
});

describe('the document of such a version', () => {
  it('prints the fit repeated with the indeterminates read otherwise', async () => {
    const words = await documentWords(corrected.versionId);
    expect(words).toContain('The fit repeated with the indeterminates of development read otherwise');
    expect(words).toMatch(/Gini moves by [+−]?0\.\d{3} with every indeterminate good and by [+−]?0\.\d{3} with every one bad/);
    expect(words).not.toContain('Fit repeated with indeterminates as good and as bad');
  });

  it('says of the sample what the API says of it', async () => {
    const words = await documentWords(corrected.versionId);
    expect(words).toContain('age Age when applying years In whole years.');
    expect(words).toContain(`Bad rate of the sample ${(100 * corrected.sampleBadRate).toFixed(2)} % of development, weighted [E-4]`);
    expect(words).toContain(`Added to the intercept ${corrected.shift.toFixed(6).replace('-', '−')} in ln(good:bad) [E-4] Reason Portfolio of 2024 [E-4]`);

    const definition = (await modeller.get(`${samplePath}/definitions/${definitionId}`).expect(200)).body as Definition;
    const rate = (part: number | null): string => `${(100 * (part ?? NaN)).toFixed(1)} %`;
    const readings = definition.counts.sensitivity ?? [];
    expect(readings).toHaveLength(3);
    for (const [place, name] of ['left out, as defined', 'all good', 'all bad'].entries()) {
      const { development, holdOut } = readings[place];
      const cells = [development, holdOut].flatMap(({ goods, bads, badRate }) => [thin(goods), thin(bads), rate(badRate)]);
      expect(words).toContain([name, ...cells].join(' '));
    }

    const { characteristics } = (await modeller.get(`${samplePath}/definitions/${definitionId}/balance`).expect(200)).body as PartitionBalance;
    expect(characteristics).toHaveLength(2);
    for (const { column, holdOut, outOfTime } of characteristics ?? []) {
      const name = column === 'age' ? 'Age when applying (years)' : column;
      expect(words).toContain(`${name} ${holdOut?.index.toFixed(3)} ${holdOut?.criticalValue?.toFixed(3)} below 0.10, within`);
      expect(outOfTime).toBeNull();
    }

    const segment = (await modeller.get(`${samplePath}/quality/column?column=segment`).expect(200)).body as ColumnQualityDetail;
    for (const { label, rows, goods, bads } of segment.groups)
      expect(words).toContain(
        label === 'pilot' ? `pilot ${rows} few few few` : `${label} ${thin(rows)} ${thin(goods)} ${thin(bads)} ${rate(bads / (goods + bads))}`,
      );
    expect(words).toContain('Segments by Way in [E-2, E-5]');
    expect(words).toContain('take no part');
  }, 120_000);
});

describe('declined applicants', () => {
  let inferred: Fit;

  it('enter a fit by a stated method with its reason, never alone', async () => {
    const settings = { name: 'With the declined', folds, lambda };
    await modeller.post(`/api/models/${modelId}/fits`).send({ binningId, settings: { ...settings, declined: { method: 'parcelling' } } }).expect(422);
    inferred = await fitPath(modeller, modelId, binningId, { ...settings, declined: { method: 'parcelling', bands: 8, uplift: 2, reason: 'A third was declined' } });
    expect(inferred).toMatchObject({ inference: 'parcelling', name: 'With the declined' });
    // The plain fit has the same settings but for that, and is taken.
    expect(inferred.acceptsOnlyId).toBe(plain.id);
    expect((await specificationOf(inferred.id)).declined).toEqual({ column: 'decision', values: ['declined'], method: 'parcelling', bands: 8, uplift: 2 });
    const [alone, with_] = await Promise.all([pathOf(plain.id), pathOf(inferred.id)]);
    // Known outcomes alone are measured: the same rows with and without inference.
    expect(with_.holdOut.map((metrics) => metrics?.rows)).toEqual(alone.holdOut.map((metrics) => metrics?.rows));
    const weightOf = (path: FitPath): number => path.characteristics[0].bins.reduce((sum, { goods, bads }) => sum + goods + bads, 0);
    expect(weightOf(with_)).toBeGreaterThan(weightOf(alone) + 50);
  }, 120_000);

  it('start the accepts-only fit where none is there', async () => {
    const { body } = await modeller
      .post(`/api/models/${modelId}/fits`)
      .send({ binningId, settings: { name: 'Ridge', mixing: 0, folds, lambda, declined: { method: 'fuzzy', reason: 'tried' } } })
      .expect(201);
    const ridge = body as Fit;
    const list = (await modeller.get(`/api/models/${modelId}/fits`).expect(200)).body as { fits: Fit[] };
    expect(list.fits.find(({ id }) => id === ridge.acceptsOnlyId)).toMatchObject({ name: 'Ridge, accepts only', inference: 'none', mixing: 0 });
    await modeller.ended(ridge.runId ?? '');
  }, 120_000);

  it('are never compared without accepts only, and stand beside the incumbent and by segment', async () => {
    const wanted = (await modeller.get(`/api/models/${modelId}/fits`).expect(200)).body as { fits: Fit[] };
    const corrected = wanted.fits.find(({ name }) => name === 'Corrected');
    const { body } = await modeller.get(`/api/models/${modelId}/comparison?fits=${inferred.id},${corrected?.id}`).expect(200);
    const comparison = body as Comparison;
    expect(comparison.fits.map(({ name, inference }) => [name, inference])).toEqual([
      ['With the declined', 'parcelling'],
      ['Corrected', 'none'],
      ['Plain', 'none'],
    ]);
    expect(comparison.sameRows).toBe(true);
    expect(comparison.settings).toContainEqual({ setting: 'Declined applicants', values: ['parcelling, 8 bands, uplift 2', 'take no part', 'take no part'] });
    expect(comparison.incumbents.map(({ column }) => column)).toEqual(['incumbent_score']);
    const { holdOut, development, outOfTime } = comparison.incumbents[0];
    expect(outOfTime).toBeNull();
    expect(holdOut?.rows).toBe((comparison.fits[0].holdOut?.rows ?? 0) - (holdOut?.missing ?? 0));
    expect(holdOut?.missing).toBeGreaterThan(0);
    expect(holdOut?.auc).toBeGreaterThan(0.6);
    expect(holdOut?.tests.map(({ fitId }) => fitId)).toEqual(comparison.fits.map(({ id }) => id));
    expect(holdOut?.tests.every(({ pValue }) => pValue !== null && pValue > 0 && pValue <= 1)).toBe(true);
    expect(development?.tests.every(({ pValue }) => pValue === null)).toBe(true);
    // Corrected and plain rank alike, on every row and in every segment.
    expect(holdOut?.tests[1].difference).toBeCloseTo(holdOut?.tests[2].difference ?? NaN, 12);
    expect(comparison.segments.map(({ value }) => value)).toEqual(['branch', 'web', 'pilot']);
    const [branch, , pilot] = comparison.segments;
    expect(branch.auc[0]).toBeGreaterThan(0.5);
    expect(branch.auc[1]).toBe(branch.auc[2]);
    expect(pilot).toMatchObject({ bads: null, auc: [null, null, null] });
    expect(comparison.segments.reduce((sum, { rows }) => sum + rows, 0)).toBe(comparison.fits[0].holdOut?.rows);
  }, 120_000);

  it('stand in the document with their reason, the accepts-only fit beside', async () => {
    const [alone, with_] = await Promise.all([pathOf(plain.id), pathOf(inferred.id)]);
    const index = with_.crossValidation.oneStandardError;
    await choose(modeller, inferred.id, { index, rule: 'one-standard-error' });
    await scale(modeller, inferred.id);
    const version = await freeze(modeller, modelId, inferred.id);
    const words = await documentWords(version.id);
    const result = (await modeller.get(`/api/versions/${version.id}/result`).expect(200)).body as Result;
    expect(words).toContain(`Declined ${String(result.counts.declined)} rows [E-1] Reject inference parcelling: 8 score bands, bad rate times 2 Reason A third was declined [E-4]`);
    expect(words).toContain('Its assumptions cannot be tested on accepted applications');
    const beside = alone.crossValidation.oneStandardError;
    expect(words).toContain(`Characteristics kept ${with_.kept[index]} ${alone.kept[beside]}`);
    expect(words).toContain(`Hold-out, AUC ${result.metrics.holdOut?.auc.toFixed(3)} ${alone.holdOut[beside]?.auc.toFixed(3)}`);
    const age = alone.characteristics.findIndex(({ column }) => column === 'age');
    expect(words).toContain(`Age when applying (years) ${with_.coefficients[index][age].toFixed(4)} ${alone.coefficients[beside][age].toFixed(4)}`);
    const { body } = await modeller.get(`/api/models/${modelId}/comparison?fits=${inferred.id},${plain.id}`).expect(200);
    const [branch] = (body as Comparison).segments;
    expect(words).toContain(`${branch.rows} ${branch.bads} ${branch.auc[0]?.toFixed(3)}`);
  }, 120_000);

  it('are not to be inferred where nobody is declined', async () => {
    const sample = await modeller.sample(modelId, 'age,bad\n' + Array.from({ length: 200 }, (_, row) => `${18 + (row % 50)},${row % 4 === 0 ? 1 : 0}`).join('\n') + '\n');
    const { body } = await modeller.get(`${sample.path}/draft`).expect(200);
    const started = await modeller.post(`${sample.path}/definitions`).send({ revision: body.revision as number }).expect(202);
    const run = await modeller.ended(started.body.id as string);
    const own = await classApplicants(modeller, modelId, (run.result as { definitionId: string }).definitionId);
    const refused = await modeller
      .post(`/api/models/${modelId}/fits`)
      .send({ binningId: own.id, settings: { name: 'Nobody', declined: { method: 'fuzzy', reason: 'tried' } } })
      .expect(422);
    expect((refused.body.problems as { message: string }[]).map(({ message }) => message)).toContainEqual(expect.stringContaining('nobody as declined'));
  }, 60_000);
});
