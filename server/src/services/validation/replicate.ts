import type { HalvesRow, PartitionAuc, ReplicationMethod } from '@tallystone/contracts/validation/schema';
import type { Result } from '@tallystone/contracts/result/types';
import type { Specification } from '@tallystone/contracts/specification/types';
import type { Transaction } from 'sequelize';
import { version as codeVersion } from '../../../../package.json';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { replicateVersionJob } from '../../jobs/definitions/versions';
import { startRun } from '../../jobs/start-run';
import type { Actor } from '../../models/person';
import { VersionRow } from '../../models/version';
import { OTHER_METHOD, SAME_METHOD, compareResults, countNumbers } from '../../replay/comparison';
import type { Challenge } from '../../replay/challenge';
import { readRawFile } from '../../storage/rawFiles';
import { actorOf } from '../people/actor-of';
import { appendRecord } from '../record/append';
import { canonical } from '../specifications/build-specification';
import { addEvidence } from '../versions/evidence';
import { type FoundVersion, findVersion } from '../versions/find-version';
import { halvesOf, performanceOf } from './halves';
import { replicateInProcess } from './replicate-in-process';

export async function startReplication(
  context: Context,
  tx: Transaction,
  asked: { version: FoundVersion; person: Actor; method: ReplicationMethod; requestId: string },
): Promise<string> {
  const { version, person, method, requestId } = asked;
  const run = await startRun(context, tx, replicateVersionJob, {
    payload: { versionId: version.id, method },
    person,
    modelId: version.modelId,
    entity: 'version',
    entityId: version.id,
    rowsOf: { sampleId: version.sampleId },
    singleton: `${version.id} ${method}`,
    requestId,
  });
  return run.id;
}

/** What is kept of a replication, as evidence. Performance holds every partition; what is covered is left out when it is shown. */
export interface ReplicationEvidence {
  readonly method: ReplicationMethod;
  readonly solver: Result['solver'];
  readonly matches: boolean;
  readonly compared: number;
  readonly differing: number;
  readonly largestDifference: number;
  readonly largestCoefficientDifference: number;
  readonly largestPointsDifference: number;
  readonly rows: readonly HalvesRow[];
  readonly scoresCompared: number;
  readonly scoresEqual: boolean;
  readonly performance: readonly PartitionAuc[];
  readonly dataSha256: string;
  readonly specificationSha256: string;
  readonly resultSha256: string;
  readonly codeVersion: string;
  readonly seconds: number;
  readonly intercept: number;
  readonly coefficients: readonly { column: string; coefficient: number }[];
  /** Absent in replications made before it existed. */
  readonly challenge?: Challenge | null;
}

/** Replays the version's specification from its stored raw file in a new process and holds both halves against each other. */
export async function replicate(
  context: Context,
  payload: { versionId: string; method: ReplicationMethod },
  options: { signal: AbortSignal; onProgress: (phase: string, share: number | null) => void },
): Promise<ReplicationEvidence> {
  const { sequelize, config } = context;
  const version = await VersionRow.findByPk(payload.versionId, { raw: true });
  const found = await findVersion(sequelize, payload.versionId);
  if (!version || !found) throw new Error(`There is no version ${payload.versionId}`);
  const specification = JSON.parse(version.specification) as Specification;
  const modeller = JSON.parse(version.result) as Result;
  const independent = payload.method === 'independent';
  const started = process.hrtime.bigint();
  const bytes = readRawFile(sequelize, config.keys.rawFiles.subarray(0, 32), found.sampleId, options.signal);
  const order = { specification, specificationSha256: version.specificationSha256, method: independent ? ('independent' as const) : ('standard' as const), version: codeVersion };
  const half = await replicateInProcess(bytes, order, { ...options, memoryMb: config.threads.memoryMb });
  const seconds = Number(process.hrtime.bigint() - started) / 1e9;

  const tolerance = independent ? OTHER_METHOD : SAME_METHOD;
  const differences = compareResults(modeller, half.result, tolerance);
  const scoresEqual = half.scores !== null && half.scores.sha256 === version.scoresSha256;
  const pairs = halvesOf(modeller, half.result, differences, tolerance.tolerance);
  const largest = (of: (row: HalvesRow) => boolean): number => pairs.reduce((most, row) => (of(row) ? Math.max(most, row.difference ?? 0) : most), 0);
  return {
    method: payload.method,
    solver: half.result.solver,
    matches: differences.length === 0 && scoresEqual && half.dataSha256 === version.dataSha256,
    compared: countNumbers(modeller),
    differing: differences.length,
    largestDifference: largest(() => true),
    largestCoefficientDifference: largest(({ place }) => place.endsWith('coefficient') || place === 'intercept'),
    largestPointsDifference: largest(({ place }) => place.endsWith('pointsRounded')),
    rows: pairs,
    scoresCompared: half.scores?.count ?? 0,
    scoresEqual,
    performance: performanceOf(half.result, ['development', 'holdOut', 'outOfTime']),
    dataSha256: half.dataSha256,
    specificationSha256: half.result.specificationSha256,
    resultSha256: canonical(half.result).sha256,
    codeVersion,
    seconds,
    intercept: half.result.intercept,
    coefficients: half.result.characteristics.map(({ column, coefficient }) => ({ column, coefficient: coefficient ?? 0 })),
    challenge: half.challenge,
  };
}

export async function writeReplication(
  context: Context,
  tx: Transaction,
  run: { id: string; personId: string },
  versionId: string,
  content: ReplicationEvidence,
): Promise<{ versionId: string; evidenceId: string; matches: boolean }> {
  const title = content.method === 'independent' ? 'Replication by the independent method from the stored raw file' : 'Replication by the same code from the stored raw file';
  const evidence = await addEvidence(context.sequelize, tx, { versionId, kind: 'replication', title, content, runId: run.id, personId: run.personId });
  const [version] = await rows<{ number: number; modelId: string }>(context.sequelize, 'SELECT number, model_id AS "modelId" FROM versions WHERE id = $1', [versionId], tx);
  await appendRecord(tx, {
    actor: await actorOf(run.personId, tx),
    action: 'version.replicated',
    entity: 'version',
    entityId: versionId,
    modelId: version.modelId,
    detail: {
      version: version.number,
      method: content.method,
      matches: content.matches,
      compared: content.compared,
      differing: content.differing,
      evidence: evidence.number,
      evidenceSha256: evidence.sha256,
    },
  });
  return { versionId, evidenceId: evidence.id, matches: content.matches };
}
