import { randomUUID } from 'node:crypto';
import { AskedConstraints } from '@tallystone/contracts/binnings/bins';
import type { SentEdit } from '@tallystone/contracts/binnings/edits';
import { benchWarnings, edgeNear, moveCut, readBench } from '@tallystone/numeric/bench';
import { binsOfEntry } from '../classing/definition';
import type { Context } from '../context';
import { inTransaction } from '../database/transaction';
import type { Actor } from '../models/person';
import { setInclusion } from '../services/binnings/change-several';
import { allEdits } from '../services/binnings/edits';
import { findBinning, findBinnings } from '../services/binnings/find-binning';
import { findOnBench, listCharacteristics } from '../services/binnings/find-characteristic';
import { saveBins } from '../services/binnings/save-bins';
import { startBinning } from '../services/binnings/start-binning';
import type { FoundModel } from '../services/models/find-model';
import { runToEnd } from './run-to-end';

const name = 'First binning';
const weakest = 0.02;

/**
 * The demo's binning: classed automatically, what tells nobody apart left out, one cut moved to a round number with its reason. Goes on from
 * wherever an earlier attempt stopped.
 */
export async function ensureDemoBinning(
  context: Context,
  model: FoundModel,
  modeller: Actor,
  definitionId: string,
): Promise<{ binningId: string }> {
  const { sequelize } = context;
  const known = (await findBinnings(sequelize, model.id)).find((binning) => binning.name === name && binning.state === 'ready');
  const binningId =
    known?.id ??
    (
      await runToEnd<{ binningId: string }>(context, async (tx) => {
        const started = await startBinning(context, tx, {
          model,
          person: modeller,
          definitionId,
          name,
          constraints: AskedConstraints.parse({}),
        });
        if (!started.runId) throw new Error('The demo binning has no run');
        return { id: started.runId };
      })
    ).binningId;
  await leaveOutWeak(context, binningId, modeller);
  await moveToRoundNumber(context, binningId, modeller, 'card_utilisation');
  return { binningId };
}

async function leaveOutWeak(context: Context, binningId: string, modeller: Actor): Promise<void> {
  await inTransaction(context.sequelize, async (tx) => {
    const binning = await findBinning(context.sequelize, binningId, tx);
    const weak = (await listCharacteristics(context.sequelize, binningId, tx)).filter(
      ({ included, summary }) => included && summary.informationValue < weakest,
    );
    if (!binning || weak.length === 0) return;
    await setInclusion(context.sequelize, tx, modeller, binning, {
      characteristics: weak.map(({ id, revision }) => ({ id, revision })),
      included: false,
      reason: 'Tells nobody apart: IV under 0.02',
    });
  });
}

/** Underwriters know this limit by a round number. */
async function moveToRoundNumber(context: Context, binningId: string, modeller: Actor, column: string): Promise<void> {
  const { sequelize } = context;
  const listed = (await listCharacteristics(sequelize, binningId)).find((one) => one.column === column);
  if (!listed || (await allEdits(sequelize, listed.id)).length > 0) return;
  await inTransaction(sequelize, async (tx) => {
    const found = await findOnBench(sequelize, binningId, listed.id, tx, true);
    const before = found && binsOfEntry(found.characteristic.definition);
    if (!found || before?.kind !== 'numeric') return;
    const { fine } = found.characteristic;
    for (let cut = before.edges.length - 1; cut >= 0; cut--) {
      const near = edgeNear(fine, before, cut, Math.round(before.edges[cut] / 10) * 10);
      const moved = near === null || near % 5 !== 0 ? null : moveCut(fine, before, cut, near);
      if (!moved || benchWarnings(readBench(fine, moved.bins), found.characteristic.constraints).length > 0) continue;
      const edit: SentEdit = {
        id: randomUUID(),
        kind: 'cut moved',
        what: moved.what,
        before,
        after: { ...before, edges: [...moved.bins.edges] },
        reason: { code: 'round number', text: 'The limit that underwriters work with' },
      };
      await saveBins(sequelize, tx, modeller, found, { bins: edit.after, edits: [edit] });
      return;
    }
  });
}
