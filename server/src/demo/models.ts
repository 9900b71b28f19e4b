import type { Context } from '../context';
import { rows } from '../database/sql';
import { inTransaction } from '../database/transaction';
import type { Actor } from '../models/person';
import { type FoundModel, findModel } from '../services/models/find-model';
import { createModel } from '../services/models/write-model';

const name = 'Personal loans, application scorecard';

/** The model of Saltmarsh Mutual that the demo works on; made by its modeller when it is missing. */
export async function ensureDemoModel(context: Context, modeller: Actor): Promise<FoundModel> {
  const [known] = await rows<{ id: string }>(context.sequelize, 'SELECT id FROM models WHERE name = $1 ORDER BY number LIMIT 1', [
    name,
  ]);
  const model = known ? await findModel(context.sequelize, known.id) : null;
  if (model) return model;
  return inTransaction(context.sequelize, (tx) =>
    createModel(tx, modeller, {
      name,
      purpose:
        'Ranks applications for personal loans by the odds that they are repaid as agreed within twelve months, for the decision to accept or decline.',
      product: 'Unsecured personal loan, 12 to 60 months',
      population: 'New applications of private persons through every channel, loans to staff left out',
      jurisdiction: 'To be confirmed by the lender’s counsel',
      owner: 'Head of Credit Risk, Saltmarsh Mutual',
      materialityTier: 1,
      intendedUse:
        'One of the grounds of the decision on an application, with the policy rules and the judgement of an underwriter near the cut-off.',
      prohibitedUse: 'Pricing, collections, marketing, and any decision on accounts that are open already.',
    }),
  );
}
