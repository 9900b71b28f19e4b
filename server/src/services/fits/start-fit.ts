import { randomUUID } from 'node:crypto';
import { type FitSettings, noInference } from '@tallystone/contracts/fits/schema';
import { barredWords } from '@tallystone/contracts/permissions/permission-words';
import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import { problemCodes } from '@tallystone/contracts/problems/codes';
import canonicalize from 'canonicalize';
import type { Transaction } from 'sequelize';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { fitPathJob } from '../../jobs/definitions/fits';
import { startRun } from '../../jobs/start-run';
import { Fit } from '../../models/fit';
import type { Actor } from '../../models/person';
import { Problem } from '../../problems/problem';
import { rowsErased } from '../../problems/rows-erased';
import { binningCharacteristics } from '../binnings/characteristics-of';
import { findBinning } from '../binnings/find-binning';
import type { FoundModel } from '../models/find-model';
import { permittedOn } from '../permissions/permitted';
import { appendRecord } from '../record/append';
import { findDefinition } from '../samples/definitions';
import { buildSpecification, canonical } from '../specifications/build-specification';
import { type FoundFit, findFit, findFits } from './find-fit';

/**
 * Takes the binning as it is now, writes the whole specification down and starts the run. The fit keeps that specification whatever
 * happens to the binning later.
 *
 * @throws Problem 422 with every setting that does not fit this binning, 409 where the rows of its sample were erased
 */
export async function startFit(
  context: Context,
  tx: Transaction,
  asked: { model: FoundModel; person: Actor; binningId: string; settings: FitSettings; requestId: string },
): Promise<FoundFit> {
  const { model, person, settings } = asked;
  const binning = await findBinning(context.sequelize, asked.binningId, tx);
  if (!binning || binning.modelId !== model.id) throw invalid([{ message: 'There is no such binning in this model. Choose another.', where: { field: 'binningId' } }]);
  if (binning.erased) throw rowsErased(binning.erased);
  if (binning.state !== 'ready') throw invalid([{ message: 'This binning has not run to its end. Wait for it, or choose another.', where: { field: 'binningId' } }]);
  const definition = await findDefinition(context.sequelize, binning.definitionId, tx);
  if (!definition) throw new Error(`Binning ${binning.id} has no sample definition`);
  const included = await binningCharacteristics(context.sequelize, binning.id, tx);
  const permitted = await permittedOn(context.sequelize, definition.id, tx);
  const barred = new Set(definition.content.columns.filter((column) => column.protected && !permitted.has(column.column)).map(({ column }) => column));
  const problems = [
    ...problemsOf(settings, included.map(({ definition: entry }) => entry.column), barred),
    ...problemsOfInference(settings, definition.content.declined, definition.counts.declined),
  ];
  if (problems.length > 0) throw invalid(problems);

  const acceptsOnlyId = settings.declined.method === 'none' ? null : await acceptsOnly(context, tx, asked);
  const specification = buildSpecification({
    title: `${model.name}, ${settings.name}`,
    head: definition.content,
    characteristics: included.map(({ definition: entry }) => entry),
    settings,
  });
  const { text, sha256 } = canonical(specification);
  const id = randomUUID();
  // Fits of a model are numbered one after the other: the model's row is the queue.
  await rows(context.sequelize, 'SELECT id FROM models WHERE id = $1 FOR UPDATE', [model.id], tx);
  const [{ next }] = await rows<{ next: number }>(context.sequelize, 'SELECT coalesce(max(number), 0) + 1 AS next FROM fits WHERE model_id = $1', [model.id], tx);
  await Fit.create(
    {
      id,
      modelId: model.id,
      number: next,
      name: settings.name,
      binningId: binning.id,
      definitionId: binning.definitionId,
      binningRevisions: Object.fromEntries(included.map(({ definition: entry, revision }) => [entry.column, revision])),
      settings,
      specification: text,
      specificationSha256: sha256,
      characteristics: specification.characteristics.length,
      acceptsOnlyId,
      createdBy: person.id,
    },
    { transaction: tx },
  );
  const run = await startRun(context, tx, fitPathJob, {
    payload: { fitId: id },
    person,
    modelId: model.id,
    entity: 'fit',
    entityId: id,
    rowsOf: { definitionId: binning.definitionId },
    requestId: asked.requestId,
  });
  await Fit.update({ runId: run.id }, { where: { id }, transaction: tx });
  await appendRecord(tx, {
    actor: person,
    action: 'fit.started',
    entity: 'fit',
    entityId: id,
    modelId: model.id,
    after: {
      name: settings.name,
      mixing: settings.mixing,
      specificationSha256: sha256,
      ...(acceptsOnlyId && { inference: settings.declined.method }),
      ...(settings.priorCorrection && { populationBadRate: settings.priorCorrection.populationBadRate }),
    },
    reason: [settings.declined.reason, settings.priorCorrection?.reason].filter(Boolean).join(' ') || undefined,
  });
  return (await findFit(context.sequelize, id, tx))!;
}

/**
 * The fit on accepted applicants alone that goes with a fit with inference: one that is there with the same settings, or another one started now.
 */
async function acceptsOnly(context: Context, tx: Transaction, asked: Parameters<typeof startFit>[2]): Promise<string> {
  const alone: FitSettings = {
    ...asked.settings,
    name: `${asked.settings.name.slice(0, 105)}, accepts only`,
    declined: noInference,
  };
  const but = (settings: FitSettings): string | undefined => canonicalize({ ...settings, name: '' });
  const wanted = but(alone);
  const there = (await findFits(context.sequelize, asked.model.id, tx)).find(
    (fit) => fit.binningId === asked.binningId && !fit.stale && fit.state !== 'failed' && fit.state !== 'cancelled' && but(fit.settings) === wanted,
  );
  return there?.id ?? (await startFit(context, tx, { ...asked, settings: alone })).id;
}

function problemsOfInference({ declined }: FitSettings, treatment: { column: string } | null, count: number): Found[] {
  if (declined.method === 'none') return [];
  const where = { field: 'settings.declined.method' };
  if (treatment === null) return [{ message: 'The sample’s definition treats nobody as declined: there is nothing to infer.', where }];
  return count === 0 ? [{ message: `No row of the sample is declined by ${treatment.column}: there is nothing to infer.`, where }] : [];
}

type Found = { message: string; where: ProblemItem['where'] };

function problemsOf(settings: FitSettings, columns: readonly string[], barred: ReadonlySet<string>): Found[] {
  const known = new Set(columns);
  const problems: Found[] = settings.characteristics
    .filter(({ column }) => !known.has(column))
    .map(({ column }) => ({ message: `"${column}" is not among the characteristics that this binning includes.`, where: { field: 'settings.characteristics', column } }));
  const leftOut = new Set(settings.characteristics.filter((entry) => entry.treatment === 'left out').map(({ column }) => column));
  const taking = columns.filter((column) => !leftOut.has(column));
  if (taking.length === 0) problems.push({ message: 'No characteristic is left in the fit. Take at least one in.', where: { field: 'settings.characteristics' } });
  for (const column of taking) {
    if (barred.has(column)) problems.push({ message: barredWords(column), where: { column } });
  }
  return problems;
}

function invalid(found: readonly Found[]): Problem {
  return new Problem(422, problemCodes.invalid, 'This fit cannot be started as it is.', {
    problems: found.map((entry) => ({ code: problemCodes.invalid, ...entry })),
  });
}
