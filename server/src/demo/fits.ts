import { FitSettings } from '@tallystone/contracts/fits/schema';
import type { Context } from '../context';
import { inTransaction } from '../database/transaction';
import type { Actor } from '../models/person';
import { binningCharacteristics } from '../services/binnings/characteristics-of';
import { choosePenalty } from '../services/fits/choose-penalty';
import { type FoundFit, findFit, findFits } from '../services/fits/find-fit';
import { startFit } from '../services/fits/start-fit';
import type { FoundModel } from '../services/models/find-model';
import { readPath } from '../services/fits/read-path';
import { runToEnd } from './run-to-end';

/** Two fits of the demo's binning: a lasso whose penalty is chosen by the one-standard-error rule, and a ridge beside it. */
export async function ensureDemoFits(context: Context, model: FoundModel, modeller: Actor, binningId: string): Promise<FoundFit> {
  const included = await binningCharacteristics(context.sequelize, binningId);
  const constrained = included.map(({ definition }) => ({ column: definition.column, signConstraint: true }));
  const folds = { count: 10, seed: 1, classing: 'woe' as const };
  const lasso = await ensureFit(context, model, modeller, binningId, { name: 'Lasso, ten folds', mixing: 1, folds, characteristics: constrained });
  await ensureFit(context, model, modeller, binningId, { name: 'Ridge, ten folds', mixing: 0, folds, lambda: { count: 40, smallestRatio: 0.0001, earlyStop: true } });
  if (lasso.choice) return lasso;
  const path = await readPath(context.sequelize, lasso);
  return inTransaction(context.sequelize, async (tx) => {
    const held = await findFit(context.sequelize, lasso.id, tx, true);
    if (!held || held.choice) return lasso;
    return choosePenalty(context, tx, held, modeller, {
      index: path.crossValidation.oneStandardError,
      rule: 'one-standard-error',
      reason: 'The smaller model predicts as well within one standard error, and underwriters can explain it.',
    });
  });
}

async function ensureFit(context: Context, model: FoundModel, modeller: Actor, binningId: string, given: unknown): Promise<FoundFit> {
  const settings = FitSettings.parse(given);
  const known = (await findFits(context.sequelize, model.id)).find((fit) => fit.name === settings.name && fit.state === 'ready');
  if (known) return known;
  const { fitId } = await runToEnd<{ fitId: string }>(context, async (tx) => {
    const started = await startFit(context, tx, { model, person: modeller, binningId, settings, requestId: 'demo' });
    if (!started.runId) throw new Error(`The demo fit ${settings.name} has no run`);
    return { id: started.runId };
  });
  const fit = await findFit(context.sequelize, fitId);
  if (!fit) throw new Error(`The demo fit ${settings.name} is not there`);
  return fit;
}
