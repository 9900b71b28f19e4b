import type { StabilityRow } from '@tallystone/contracts/validation/schema';
import type { Result } from '@tallystone/contracts/result/types';
import type { Specification } from '@tallystone/contracts/specification/types';
import { stabilityOfCoefficients, stabilityOfPoints } from '@tallystone/numeric';
import type { Transaction } from 'sequelize';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { studyStabilityJob } from '../../jobs/definitions/versions';
import { startRun } from '../../jobs/start-run';
import type { Actor } from '../../models/person';
import { VersionRow } from '../../models/version';
import { runInThread } from '../../threads/run-in-thread';
import type { ResampleDraw } from '../../threads/study-stability';
import { actorOf } from '../people/actor-of';
import { appendRecord } from '../record/append';
import { type LoadedColumns, loadColumns } from '../samples/load-columns';
import { addEvidence } from '../versions/evidence';
import { type FoundVersion, findVersion } from '../versions/find-version';

export async function startStability(
  context: Context,
  tx: Transaction,
  asked: { version: FoundVersion; person: Actor; resamples: number; seed: number; requestId: string },
): Promise<string> {
  const { version, person, resamples, seed, requestId } = asked;
  const run = await startRun(context, tx, studyStabilityJob, {
    payload: { versionId: version.id, resamples, seed },
    person,
    modelId: version.modelId,
    entity: 'version',
    entityId: version.id,
    rowsOf: { sampleId: version.sampleId },
    singleton: version.id,
    requestId,
  });
  return run.id;
}

export interface StabilityEvidence {
  readonly resamples: number;
  readonly seed: number;
  readonly lambda: number;
  readonly level: number;
  readonly notConverged: number;
  readonly rows: readonly StabilityRow[];
}

const level = 0.95;

/** Resamples of one part: as many as the solver refits at once. */
const batchSize = 16;

export interface Batch {
  readonly versionId: string;
  readonly seed: number;
  readonly first: number;
  readonly count: number;
}

/** The study in parts. A draw depends on the seed and its number alone, so the study is the same whoever does which part. */
export function batchesOf({ versionId, resamples, seed }: { versionId: string; resamples: number; seed: number }): Batch[] {
  return Array.from({ length: Math.ceil(resamples / batchSize) }, (_, batch) => {
    const first = batch * batchSize;
    return { versionId, seed, first, count: Math.min(batchSize, resamples - first) };
  });
}

export interface PlainDraw {
  readonly resample: number;
  readonly intercept: number;
  readonly coefficients: number[];
  readonly converged: boolean;
}

/** Refits the version at its penalty on the stratified bootstrap resamples of one part. */
export async function resampleBatch(context: Context, { versionId, ...batch }: Batch, signal: AbortSignal): Promise<PlainDraw[]> {
  const { specification, rows: count, columns } = await studied.of(context, versionId);
  const draws = await runInThread('version.resample', { specification, rows: count, columns, ...batch }, { signal });
  return draws.map((draw) => ({ ...draw, coefficients: Array.from(draw.coefficients) }));
}

/** The rows of the version studied last: the next part is most often of the same. Let go when a minute has passed without one. */
const studied = new (class {
  private kept: { readonly versionId: string; readonly loaded: Promise<LoadedColumns & { specification: Specification }> } | null = null;
  private timer: NodeJS.Timeout | undefined;

  of(context: Context, versionId: string): Promise<LoadedColumns & { specification: Specification }> {
    clearTimeout(this.timer);
    this.timer = setTimeout(() => (this.kept = null), 60_000).unref();
    if (this.kept?.versionId === versionId) return this.kept.loaded;
    const loaded = loadStudied(context, versionId);
    this.kept = { versionId, loaded };
    loaded.catch(() => {
      if (this.kept?.loaded === loaded) this.kept = null;
    });
    return loaded;
  }
})();

async function loadStudied(context: Context, versionId: string): Promise<LoadedColumns & { specification: Specification }> {
  const { row, found } = await readVersionRow(context, versionId);
  const whole = JSON.parse(row.specification) as Specification;
  const { lambda, mixing } = JSON.parse(row.result) as Result;
  // At the penalty that was chosen, without folds: nothing is chosen here.
  const specification: Specification = { ...whole, fit: { ...whole.fit, mixing, lambda: { value: lambda }, choose: 'value', folds: null, refit: null } };
  return { specification, ...(await loadColumns(context.sequelize, found.sampleId, specification)) };
}

async function readVersionRow(context: Context, versionId: string) {
  const [row, found] = await Promise.all([VersionRow.findByPk(versionId, { raw: true }), findVersion(context.sequelize, versionId)]);
  if (!row || !found) throw new Error(`There is no version ${versionId}`);
  return { row, found };
}

/** What the draws of a study come to. */
export async function summariseStability(
  context: Context,
  { versionId, resamples, seed }: { versionId: string; resamples: number; seed: number },
  draws: readonly PlainDraw[],
): Promise<StabilityEvidence> {
  const { row } = await readVersionRow(context, versionId);
  const typed = draws.map((draw) => ({ ...draw, coefficients: Float64Array.from(draw.coefficients) }));
  return summarise(typed, JSON.parse(row.result) as Result, JSON.parse(row.specification) as Specification, { resamples, seed });
}

function summarise(draws: readonly ResampleDraw[], result: Result, { scaling }: Specification, asked: { resamples: number; seed: number }): StabilityEvidence {
  const fit = { intercept: result.intercept, coefficients: result.characteristics.map(({ coefficient }) => coefficient ?? 0) };
  const woe = result.characteristics.map(({ bins }) => bins.map((bin) => bin.woe));
  const { coefficients } = stabilityOfCoefficients(draws, fit, level);
  const points = stabilityOfPoints(draws, fit, woe, scaling.pointsToDouble, level);
  const factor = scaling.pointsToDouble / Math.LN2;
  return {
    ...asked,
    lambda: result.lambda,
    level,
    notConverged: draws.filter(({ converged }) => !converged).length,
    rows: result.characteristics.map(({ column, bins }, j): StabilityRow => {
      const { shareSelected } = coefficients[j];
      const selected = draws.filter((draw) => draw.coefficients[j] !== 0);
      const sign = Math.sign(fit.coefficients[j]);
      return {
        column,
        label: column,
        coefficient: fit.coefficients[j],
        selected: shareSelected,
        sameSign: selected.length === 0 || sign === 0 ? null : selected.filter((draw) => Math.sign(draw.coefficients[j]) === sign).length / selected.length,
        lower: coefficients[j].lower,
        upper: coefficients[j].upper,
        bins: bins.map((bin, place) => ({
          label: bin.label,
          points: factor * fit.coefficients[j] * bin.woe,
          lower: points[j][place].lower,
          upper: points[j][place].upper,
        })),
      };
    }),
  };
}

export async function writeStability(
  context: Context,
  tx: Transaction,
  run: { id: string; personId: string },
  versionId: string,
  content: StabilityEvidence,
): Promise<{ versionId: string; evidenceId: string }> {
  const evidence = await addEvidence(context.sequelize, tx, {
    versionId,
    kind: 'stability',
    title: `Stability over ${content.resamples} bootstrap resamples`,
    content,
    runId: run.id,
    personId: run.personId,
  });
  const [version] = await rows<{ number: number; modelId: string }>(context.sequelize, 'SELECT number, model_id AS "modelId" FROM versions WHERE id = $1', [versionId], tx);
  await appendRecord(tx, {
    actor: await actorOf(run.personId, tx),
    action: 'version.stability-studied',
    entity: 'version',
    entityId: versionId,
    modelId: version.modelId,
    detail: { version: version.number, resamples: content.resamples, seed: content.seed, evidence: evidence.number, evidenceSha256: evidence.sha256 },
  });
  return { versionId, evidenceId: evidence.id };
}
