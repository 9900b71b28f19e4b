import { reasonTextOf } from '@tallystone/contracts/scorecards/reason-text';
import type { VersionTexts } from '@tallystone/contracts/versions/schema';
import type { Context } from '../context';
import { inTransaction } from '../database/transaction';
import type { Actor } from '../models/person';
import { findDocuments } from '../services/documents/find-document';
import { startDocument } from '../services/documents/store';
import type { FoundFit } from '../services/fits/find-fit';
import { loadScorecard } from '../services/scorecards/load-scorecard';
import { saveScorecard } from '../services/scorecards/save-scorecard';
import { actOnVersion } from '../services/versions/act';
import { type FoundVersion, findVersion, findVersions, holdVersion } from '../services/versions/find-version';
import { startFreezing } from '../services/versions/freeze';
import { readTexts, saveTexts } from '../services/versions/texts';
import { runToEnd } from './run-to-end';

const texts: VersionTexts = {
  recommendation: 'Use the scorecard to rank applications of new customers from the day the second signature is given.',
  exclusionsRationale: 'Loans to staff follow other rules and are decided by hand. Only facts known at application take rows out.',
  outcomeJustification: 'Bad is 90 or more days past due within twelve months, the point from which few loans of Saltmarsh Mutual return to order.',
  sourcesSuitability: 'One file drawn from the loan system and the bureau, reconciled with the ledger of the same months.',
  penaltyReason: 'The one-standard-error rule gives the smallest model that predicts as well as the best within what chance explains.',
  businessSense: 'Each characteristic kept describes willingness or ability to repay in a way that underwriters recognise.',
  performanceInterpretation: 'It separates well in development and hold-out. The last half-year drifts and is to be watched.',
  limitations: 'Built on accepted applicants alone: it says little about those who were always declined.',
  monitoringPlan: 'PSI, AUC and calibration each quarter; redevelopment when PSI stays above 0.25 or calibration fails twice.',
  changeReasons: 'First version.',
};

const reasonTexts: Readonly<Record<string, string>> = {
  card_utilisation: 'Balances on credit cards are high compared with their limits',
  enquiries_6m: 'Many recent applications for credit',
  months_since_arrears: 'Recent payments in arrears',
};

/** The demo's version: scaled, frozen, explained, submitted and documented, so that a validator finds something to review. */
export async function ensureDemoVersion(context: Context, fit: FoundFit, modeller: Actor): Promise<void> {
  const { sequelize } = context;
  await ensureScorecard(context, fit, modeller);
  let version = (await findVersions(sequelize, fit.modelId))[0] as FoundVersion | undefined;
  if (!version) {
    const { versionId } = await runToEnd<{ versionId: string }>(context, async (tx) => ({
      id: await startFreezing(context, tx, { fit, person: modeller, note: 'First version for review', requestId: 'demo' }),
    }));
    version = (await findVersion(sequelize, versionId))!;
  }
  const { id } = version;
  await inTransaction(sequelize, async (tx) => {
    await holdVersion(sequelize, tx, id);
    const held = (await findVersion(sequelize, id, tx))!;
    const before = await readTexts(sequelize, held, modeller, tx);
    if (Object.keys(before.texts).length === 0) await saveTexts(tx, held, modeller, before, texts);
    if (held.state === 'In development') await actOnVersion(context, tx, held, modeller, { act: 'submit', statement: 'Ready for independent review.' });
  });
  if ((await findDocuments(sequelize, id)).length > 0) return;
  const submitted = (await findVersion(sequelize, id))!;
  await runToEnd(context, async (tx) => ({ id: await startDocument(context, tx, { version: submitted, person: modeller, requestId: 'demo' }) }));
}

async function ensureScorecard(context: Context, fit: FoundFit, modeller: Actor): Promise<void> {
  await inTransaction(context.sequelize, async (tx) => {
    const loaded = await loadScorecard(context.sequelize, fit, tx);
    if (loaded.revision > 0) return;
    const own = Object.fromEntries(
      loaded.kept.map(({ definition: { column }, label }) => [column, reasonTextOf(reasonTexts, column) || `Fewer points than others for: ${label.replaceAll('_', ' ')}`]),
    );
    await saveScorecard(tx, fit, modeller, loaded, { ...loaded.settings, cutOff: 470, reasons: { ...loaded.settings.reasons, texts: own } });
  });
}
