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
import { runInThread, threadCount } from '../../threads/run-in-thread';
import type { ResampleDraw } from '../../threads/study-stability';
import { actorOf } from '../people/actor-of';
import { appendRecord } from '../record/append';
import { loadColumns } from '../samples/load-columns';
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

/**
 * Refits the version at its penalty on stratified bootstrap resamples of development: batches spread over the threads of this worker. A draw
 * depends on the seed and its number alone, so the study is the same however it is cut.
 */
export async function studyStability(
  context: Context,
  payload: { versionId: string; resamples: number; seed: number },
  options: { signal: AbortSignal; onProgress: (phase: string, share: number | null) => void },
): Promise<StabilityEvidence> {
  const { versionId, resamples, seed } = payload;
  const row = await VersionRow.findByPk(versionId, { raw: true });
  const found = await findVersion(context.sequelize, versionId);
  if (!row || !found) throw new Error(`There is no version ${versionId}`);
  const whole = JSON.parse(row.specification) as Specification;
  const result = JSON.parse(row.result) as Result;
  // The path down to the chosen penalty, so that the start is the version's own fit; no folds, nothing is chosen here.
  const grid = result.path.map(({ lambda }) => lambda).filter((lambda) => lambda >= result.lambda);
  const specification: Specification = { ...whole, fit: { ...whole.fit, lambda: { grid }, choose: 'value', folds: null, refit: null } };
  const { rows: count, columns } = await loadColumns(context.sequelize, found.sampleId, specification);

  const batches = Math.min(threadCount(), resamples);
  const shares = new Array<number>(batches).fill(0);
  const draws = await Promise.all(
    Array.from({ length: batches }, (_, batch): Promise<ResampleDraw[]> => {
      const first = Math.floor((batch * resamples) / batches);
      const next = Math.floor(((batch + 1) * resamples) / batches);
      return runInThread(
        'version.resample',
        { specification, rows: count, columns, seed, first, count: next - first },
        {
          signal: options.signal,
          onProgress: (phase, share) => {
            shares[batch] = share ?? 0;
            options.onProgress(phase, shares.reduce((sum, value) => sum + value, 0) / batches);
          },
        },
      );
    }),
  );
  return summarise(draws.flat(), result, whole, { resamples, seed });
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
