import { randomUUID } from 'node:crypto';
import { problemCodes } from '@tallystone/contracts/problems/codes';
import { barredWords } from '@tallystone/contracts/permissions/permission-words';
import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import type { Sequelize, Transaction } from 'sequelize';
import { version as codeVersion } from '../../../../package.json';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { freezeVersionJob } from '../../jobs/definitions/versions';
import { startRun } from '../../jobs/start-run';
import type { Actor } from '../../models/person';
import { VersionActRow, VersionRow, VersionTextsRow } from '../../models/version';
import { Problem, conflict } from '../../problems/problem';
import { rowsErased } from '../../problems/rows-erased';
import type { FreezeAnswer } from '../../threads/freeze-version';
import { runInThread } from '../../threads/run-in-thread';
import { type FoundFit, findFit } from '../fits/find-fit';
import { permissionsIn, permittedOn } from '../permissions/permitted';
import { actorOf } from '../people/actor-of';
import { appendRecord } from '../record/append';
import { type FoundDefinition, findDefinition } from '../samples/definitions';
import { loadColumns } from '../samples/load-columns';
import { type LoadedScorecard, loadScorecard } from '../scorecards/load-scorecard';
import { canonical } from '../specifications/build-specification';
import { type Beside, comparedWith } from './compared-with';
import { addEvidence } from './evidence';
import { versionEvidence } from './version-evidence';

/** Everything that stands in the way of freezing this fit's scorecard. */
export async function obstaclesToFreezing(context: Pick<Context, 'sequelize'>, fit: FoundFit, tx: Transaction | null): Promise<ProblemItem[]> {
  const obstacles: ProblemItem[] = [];
  const obstacle = (code: string, message: string): number => obstacles.push({ code, message, where: { fit: fit.id } });
  if (fit.state !== 'ready') obstacle('fit-not-ready', 'The fit has not run to its end.');
  else if (!fit.choice) obstacle('no-penalty-chosen', 'No penalty of the fit is chosen yet.');
  else if (fit.choice.kept === 0) obstacle('nothing-kept', 'At the chosen penalty no characteristic is kept: there is no scorecard to freeze.');
  if (fit.stale) obstacle('stale-fit', 'The binning has changed since this fit. Fit again, so that the version has the bins that are there now.');
  const beside = fit.acceptsOnlyId === null ? null : await findFit(context.sequelize, fit.acceptsOnlyId, tx);
  if (beside && beside.state !== 'ready')
    obstacle('no-accepts-only', `“${beside.name}” is ${beside.state}: a fit with declined applicants is frozen with the accepts-only fit beside it.`);
  for (const column of await barredIn(context.sequelize, fit, tx)) obstacle('barred-field', barredWords(column));
  const [found] = await rows<{ revision: number }>(context.sequelize, 'SELECT revision FROM scorecards WHERE fit_id = $1', [fit.id], tx);
  if (!found) obstacle('no-scorecard', 'The scorecard of this fit was never saved: state scaling and reason texts first.');
  return obstacles;
}

/** Characteristics of the fit that are protected and not permitted, or no longer. */
async function barredIn(sequelize: Sequelize, fit: FoundFit, tx: Transaction | null): Promise<string[]> {
  const permitted = await permittedOn(sequelize, fit.definitionId, tx);
  const taken = await rows<{ column: string }>(
    sequelize,
    `SELECT entry ->> 'column' AS "column"
       FROM fits f JOIN sample_definitions d ON d.id = f.definition_id
       CROSS JOIN LATERAL jsonb_array_elements(f.specification::jsonb -> 'characteristics') entry
       CROSS JOIN LATERAL jsonb_array_elements(d.content -> 'columns') defined
      WHERE f.id = $1 AND defined ->> 'column' = entry ->> 'column' AND (defined ->> 'protected')::boolean`,
    [fit.id],
    tx,
  );
  return taken.map(({ column }) => column).filter((column) => !permitted.has(column));
}

/** @throws Problem 409 with every obstacle */
export async function startFreezing(
  context: Context,
  tx: Transaction,
  asked: { fit: FoundFit; person: Actor; note: string; requestId: string },
): Promise<string> {
  const { fit, person, note, requestId } = asked;
  // Before what else stands in the way: it would be put right for nothing.
  if (fit.erased) throw rowsErased(fit.erased);
  const obstacles = await obstaclesToFreezing(context, fit, tx);
  if (obstacles.length > 0) throw conflict('cannot-freeze', 'This scorecard cannot be frozen as it is.', obstacles);
  const run = await startRun(context, tx, freezeVersionJob, {
    payload: { fitId: fit.id, choiceId: fit.choice!.id, note },
    person,
    modelId: fit.modelId,
    entity: 'fit',
    entityId: fit.id,
    rowsOf: { definitionId: fit.definitionId },
    singleton: fit.id,
    requestId,
  });
  return run.id;
}

type Frozen = Extract<FreezeAnswer, { problems: null }>;

/** What freezing came to, before it is written. */
export interface Freezing {
  readonly fit: FoundFit;
  readonly definition: FoundDefinition;
  readonly loaded: LoadedScorecard;
  readonly dataSha256: string;
  readonly specification: { text: string; sha256: string };
  readonly frozen: Frozen;
  readonly beside: Beside;
}

/**
 * Replays the specification from the stored columns: the result that the validator's half is held against.
 *
 * @throws Problem 409 when something has come in the way since freezing was asked for; 422 with what the data make impossible
 */
export async function replayForFreezing(
  context: Context,
  payload: { fitId: string; choiceId: string },
  options: { signal: AbortSignal; onProgress: (phase: string, share: number | null) => void },
): Promise<Freezing> {
  const { sequelize } = context;
  const fit = await findFit(sequelize, payload.fitId);
  if (!fit) throw new Error(`There is no fit ${payload.fitId}`);
  if (fit.choice?.id !== payload.choiceId) throw conflict('choice-changed', 'Another penalty was chosen meanwhile. Look at it and freeze again.');
  const definition = await findDefinition(sequelize, fit.definitionId);
  const loaded = await loadScorecard(sequelize, fit);
  const dataSha256 = loaded.specification.data.sha256;
  if (!definition || !dataSha256) throw new Error(`Fit ${fit.id} is not tied to a file`);
  const specification = canonical(loaded.specification);
  options.onProgress('Reading the columns', 0);
  const { rows: count, columns } = await loadColumns(sequelize, definition.sampleId, loaded.specification);
  const frozen = await runInThread(
    'version.freeze',
    { specification: loaded.specification, specificationSha256: specification.sha256, dataSha256, rows: count, columns, version: codeVersion },
    options,
  );
  if (frozen.problems !== null) {
    throw new Problem(422, problemCodes.invalid, frozen.problems.map(({ message }) => message).join(' '));
  }
  const place = frozen.result.path.length > 0 ? frozen.result.lambda : Number.NaN;
  const distance = Math.abs(place - fit.choice.lambda);
  if (!(distance <= 1e-9 * Math.max(1, fit.choice.lambda))) {
    throw new Error(`Replaying chose penalty ${place} where ${fit.choice.lambda} was chosen on the path`);
  }
  const beside = await comparedWith(sequelize, fit, definition.content);
  return { fit, definition, loaded, dataSha256, specification, frozen, beside };
}

/** Writes the version with its first act, its evidence and its record, in the transaction that ends the run. */
export async function writeVersion(
  context: Context,
  tx: Transaction,
  run: { id: string; personId: string },
  note: string,
  { fit, definition, loaded, dataSha256, specification, frozen, beside }: Freezing,
): Promise<{ versionId: string; number: number }> {
  const { sequelize } = context;
  await rows(sequelize, 'SELECT id FROM models WHERE id = $1 FOR UPDATE', [fit.modelId], tx);
  // Under the lock that a permission is given and withdrawn under.
  const permissions = permissionsIn(loaded.specification, await permittedOn(sequelize, fit.definitionId, tx));
  if (canonical(permissions).sha256 !== canonical(loaded.specification.permissions ?? []).sha256)
    throw conflict('permissions-changed', 'What compliance permits of the protected columns has changed meanwhile. Look at it and freeze again.');
  const [{ next }] = await rows<{ next: number }>(sequelize, 'SELECT coalesce(max(number), 0) + 1 AS next FROM versions WHERE model_id = $1', [fit.modelId], tx);
  const result = canonical(frozen.result);
  const fingerprint = canonical({ dataSha256, specificationSha256: specification.sha256, codeVersion, resultSha256: result.sha256 }).sha256;
  const versionId = randomUUID();
  await VersionRow.create(
    {
      id: versionId,
      modelId: fit.modelId,
      number: next,
      fitId: fit.id,
      choiceId: fit.choice!.id,
      binningId: fit.binningId,
      definitionId: fit.definitionId,
      note,
      specification: specification.text,
      specificationSha256: specification.sha256,
      result: result.text,
      resultSha256: result.sha256,
      dataSha256,
      scoresSha256: frozen.scores.sha256,
      codeVersion,
      fingerprint,
      runId: run.id,
      frozenBy: run.personId,
    },
    { transaction: tx },
  );
  await VersionActRow.create(
    { versionId, act: 'freeze', fromState: null, toState: 'In development', conclusion: null, conditions: [], statement: note, role: 'modeller', personId: run.personId },
    { transaction: tx },
  );
  await VersionTextsRow.create({ versionId, texts: {}, changedBy: run.personId }, { transaction: tx });
  const pieces = await versionEvidence(sequelize, tx, { fit, definition, loaded, specification, result, fingerprint, dataSha256, frozen, beside });
  for (const piece of pieces) await addEvidence(sequelize, tx, { ...piece, versionId, runId: run.id, personId: run.personId });
  await appendRecord(tx, {
    actor: await actorOf(run.personId, tx),
    action: 'version.frozen',
    entity: 'version',
    entityId: versionId,
    modelId: fit.modelId,
    after: { version: next, fingerprint, specificationSha256: specification.sha256, resultSha256: result.sha256, dataSha256 },
    reason: note,
  });
  return { versionId, number: next };
}
