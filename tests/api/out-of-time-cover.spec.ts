import { execFileSync } from 'node:child_process';
import type { FitPath } from '@tallystone/contracts/fits/schema';
import type { Result } from '@tallystone/contracts/result/types';
import type { ValidationWork } from '@tallystone/contracts/validation/schema';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type BinningWorld, startBinningWorld } from '../support/binning-world';
import type { Visitor } from '../support/intake';
import { choose, fitPath, freeze, makeDocument, replicate, scale } from '../support/line';

/** From the fit on: what out-of-time would show is in no answer and in no document before somebody opens it, whoever asks. */
let world: BinningWorld;
let fitId: string;
let otherId: string;
let versionId: string;

beforeAll(async () => {
  world = await startBinningWorld();
}, 120_000);
afterAll(() => world.server.stop());

const pathOf = async (visitor: Visitor): Promise<FitPath> =>
  (await visitor.get(`/api/fits/${fitId}/path`).expect(200)).body as FitPath;
const places = (): string[] => [
  `/api/fits/${fitId}`,
  `/api/fits/${fitId}/path`,
  `/api/fits/${fitId}/scorecard`,
  `/api/models/${world.modelId}/comparison?fits=${fitId},${otherId}`,
  `/api/versions/${versionId}`,
  `/api/versions/${versionId}/validation`,
];
const answers = async (visitor: Visitor): Promise<string> => {
  const texts: string[] = [];
  for (const place of places()) texts.push((await visitor.get(place).expect(200)).text);
  return texts.join('\n');
};

async function documentText(visitor: Visitor): Promise<string> {
  const made = await makeDocument(visitor, versionId);
  const file = await visitor
    .get(`/api/documents/${made.documentId}/file`)
    .buffer(true)
    .parse((incoming, done) => {
      const chunks: Buffer[] = [];
      incoming.on('data', (chunk: Buffer) => chunks.push(chunk));
      incoming.on('end', () => done(null, Buffer.concat(chunks)));
    });
  return execFileSync('pdftotext', ['-layout', '-', '-'], { input: file.body as Buffer, encoding: 'utf8', maxBuffer: 1 << 26 });
}

describe('out-of-time from the fit to the document', () => {
  let before: { answers: string; document: string };

  it('is covered on path, comparison, scorecard, version, validation and in the document', async () => {
    const { modeller, validator, modelId, binning } = world;
    const settings = { lambda: { count: 20, smallestRatio: 0.01 }, folds: { count: 3, seed: 1, classing: 'once' } };
    fitId = (await fitPath(modeller, modelId, binning.id, { name: 'Lasso', ...settings })).id;
    otherId = (await fitPath(modeller, modelId, binning.id, { name: 'Ridge', mixing: 0, ...settings })).id;
    const path = await pathOf(modeller);
    expect(path).toMatchObject({ outOfTime: null, outOfTimeState: 'covered' });
    const { minimum } = path.crossValidation;
    await choose(modeller, fitId, { index: minimum, rule: 'minimum', reason: 'Keeps what predicts' });
    await scale(modeller, fitId);
    versionId = (await freeze(modeller, modelId, fitId)).id;
    await replicate(validator, versionId, 'same code');
    const work = (await validator.get(`/api/versions/${versionId}/validation`).expect(200)).body as ValidationWork;
    expect(work.performance.map(({ partition }) => partition)).toEqual(['development', 'holdOut']);
    const refused = await validator.get(`/api/versions/${versionId}/result`).expect(409);
    expect(refused.body.code).toBe('out-of-time-covered');
    before = { answers: (await answers(modeller)) + (await answers(validator)), document: await documentText(modeller) };
    expect(before.document).toContain('covered');
  }, 240_000);

  it('is shown everywhere once it is opened, and none of its figures had been told before', async () => {
    const { modeller, validator, definitionId } = world;
    await modeller
      .post(`/api/sample-definitions/${definitionId}/out-of-time`)
      .send({ reason: 'The model is frozen and a last check is due' })
      .expect(201);
    const path = await pathOf(validator);
    expect(path.outOfTimeState).toBe('opened');
    const result = JSON.parse((await validator.get(`/api/versions/${versionId}/result`).expect(200)).text) as Result;
    const measured = result.metrics.outOfTime;
    if (!measured) throw new Error('The result measures no out-of-time rows');
    const chosen = path.outOfTime?.[path.crossValidation.minimum];
    expect(chosen?.auc).toBeCloseTo(measured.auc, 12);
    const work = (await validator.get(`/api/versions/${versionId}/validation`).expect(200)).body as ValidationWork;
    expect(work.performance.map(({ partition }) => partition)).toEqual(['development', 'holdOut', 'outOfTime']);
    // Ten digits of a figure are no chance meeting. They stand in the answers now, and did not before.
    const now = await answers(validator);
    const aucs = (path.outOfTime ?? []).flatMap((metrics) => (metrics && metrics.auc !== 0.5 ? [metrics.auc] : []));
    expect(aucs.length).toBeGreaterThan(3);
    for (const figure of [...aucs, measured.auc, measured.ks].map((value) => String(value).slice(0, 12))) {
      expect(now).toContain(figure);
      expect(before.answers).not.toContain(figure);
    }
    expect(await documentText(validator)).toContain(measured.auc.toFixed(3));
    expect(before.document).not.toContain(measured.auc.toFixed(3));
  }, 240_000);
});
