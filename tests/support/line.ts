import { randomUUID } from 'node:crypto';
import type { Fit } from '@tallystone/contracts/fits/schema';
import type { Scorecard } from '@tallystone/contracts/scorecards/schema';
import type { Version, VersionTexts } from '@tallystone/contracts/versions/schema';
import type { Run } from '@tallystone/contracts/runs/schema';
import type { Visitor } from './intake';

/** Steps of the line from a binning to a signed version, as the client takes them. Each waits for its run and returns what came of it. */

export const key = (): string => `test-${randomUUID()}`;

async function succeeded(visitor: Visitor, runId: string): Promise<Run> {
  const run = await visitor.ended(runId, 180_000);
  if (run.state !== 'succeeded') throw new Error(`Run ${run.kind} ${run.state}: ${run.problem?.message ?? 'no reason given'}`);
  return run;
}

export async function fitPath(
  visitor: Visitor,
  modelId: string,
  binningId: string,
  settings: Record<string, unknown>,
): Promise<Fit> {
  const started = await visitor
    .post(`/api/models/${modelId}/fits`)
    .set('Idempotency-Key', key())
    .send({ binningId, settings: { name: 'Lasso', ...settings } })
    .expect(201);
  const fit = started.body as Fit;
  await succeeded(visitor, fit.runId!);
  return (await visitor.get(`/api/fits/${fit.id}`).expect(200)).body as Fit;
}

export async function choose(visitor: Visitor, fitId: string, choice: Record<string, unknown>): Promise<Fit> {
  const read = await visitor.get(`/api/fits/${fitId}`).expect(200);
  return (await visitor.put(`/api/fits/${fitId}/choice`).set('If-Match', read.headers.etag).send(choice).expect(200)).body as Fit;
}

/** Saves the scorecard with a reason text for each characteristic kept. */
export async function scale(visitor: Visitor, fitId: string, change: Record<string, unknown> = {}): Promise<Scorecard> {
  const read = await visitor.get(`/api/fits/${fitId}/scorecard`).expect(200);
  const scorecard = read.body as Scorecard;
  const texts = Object.fromEntries(scorecard.characteristics.map(({ column }) => [column, `Too few points for ${column}`]));
  const settings = { ...scorecard.settings, ...change, reasons: { ...scorecard.settings.reasons, texts } };
  return (await visitor.put(`/api/fits/${fitId}/scorecard`).set('If-Match', read.headers.etag).send(settings).expect(200))
    .body as Scorecard;
}

export async function freeze(visitor: Visitor, modelId: string, fitId: string, note = 'First version'): Promise<Version> {
  const started = await visitor
    .post(`/api/models/${modelId}/versions`)
    .set('Idempotency-Key', key())
    .send({ fitId, note })
    .expect(202);
  const run = await succeeded(visitor, (started.body as { runId: string }).runId);
  const { versionId } = run.result as { versionId: string };
  return (await visitor.get(`/api/versions/${versionId}`).expect(200)).body as Version;
}

/** A text in every one of the author's sections. */
export const everyText: VersionTexts = {
  recommendation: 'Use it for applications of new customers.',
  exclusionsRationale: 'Only facts known at application take rows out.',
  outcomeJustification: 'Bad as the source defines it.',
  sourcesSuitability: 'One file, complete and documented.',
  penaltyReason: 'The one-standard-error rule keeps the model small.',
  businessSense: 'Each characteristic kept has a reading that lenders know.',
  performanceInterpretation: 'It ranks well; calibration holds.',
  trendExceptions: 'None, or a turn that lenders know.',
  signExceptions: 'None, or explained by correlation with a stronger characteristic.',
  limitations: 'A single sample.',
  monitoringPlan: 'PSI and AUC each quarter; redevelopment above 0.25.',
  changeReasons: 'First version.',
};

export async function writeTexts(visitor: Visitor, versionId: string, texts: VersionTexts = everyText): Promise<void> {
  const read = await visitor.get(`/api/versions/${versionId}/texts`).expect(200);
  await visitor.put(`/api/versions/${versionId}/texts`).set('If-Match', read.headers.etag).send(texts).expect(200);
}

export async function act(visitor: Visitor, versionId: string, body: Record<string, unknown>): Promise<Version> {
  return (await visitor.post(`/api/versions/${versionId}/acts`).send(body).expect(200)).body as Version;
}

export async function replicate(visitor: Visitor, versionId: string, method: 'same code' | 'independent'): Promise<Run> {
  const started = await visitor
    .post(`/api/versions/${versionId}/replications`)
    .set('Idempotency-Key', key())
    .send({ method })
    .expect(202);
  return succeeded(visitor, (started.body as { runId: string }).runId);
}

export async function studyStability(visitor: Visitor, versionId: string, resamples: number): Promise<Run> {
  const started = await visitor
    .post(`/api/versions/${versionId}/stability`)
    .set('Idempotency-Key', key())
    .send({ resamples, seed: 1 })
    .expect(202);
  return succeeded(visitor, (started.body as { runId: string }).runId);
}

export async function makeDocument(visitor: Visitor, versionId: string): Promise<{ documentId: string; sha256: string }> {
  const started = await visitor.post(`/api/versions/${versionId}/documents`).set('Idempotency-Key', key()).expect(202);
  const run = await succeeded(visitor, (started.body as { runId: string }).runId);
  return run.result as { documentId: string; sha256: string };
}
