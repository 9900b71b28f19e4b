import type { AskedConstraints } from '@tallystone/contracts/binnings/bins';
import { mostReclassedAtOnce } from '@tallystone/contracts/binnings/limits';
import type { Sequelize, Transaction } from 'sequelize';
import { automaticClassing, binsOfEntry, withBins } from '../../classing/definition';
import type { ReclassFine } from '../../classing/class-column';
import type { Context } from '../../context';
import { reclassBinningJob } from '../../jobs/definitions/binnings';
import type { RunContext } from '../../jobs/handler';
import { startRun } from '../../jobs/start-run';
import { BinningCharacteristic, BinningEdit } from '../../models/binning';
import type { Actor } from '../../models/person';
import { invalidField, notFound } from '../../problems/problem';
import { runInThread } from '../../threads/run-in-thread';
import { actorOf } from '../people/actor-of';
import { appendRecord } from '../record/append';
import { inTurn } from '../samples/in-turn';
import { type Chosen, lockChosen } from './change-several';
import { type FoundBinning, findBinning } from './find-binning';
import { type FoundCharacteristic, findCharacteristics } from './find-characteristic';
import { inclusionOf, recordInclusion } from './inclusion';
import { storedMonths } from './months';

/**
 * Classing anew under other constraints, from the fine classes that are counted already. Manual edits are no longer in effect afterwards; they stay in
 * the history. A few characteristics are classed while the request waits, more of them by a run.
 */

export interface AskedReclassing {
  readonly characteristics: readonly Chosen[];
  readonly constraints: Omit<AskedConstraints, 'fineClasses'>;
  readonly reason: string;
}

type Reclassed = Awaited<ReturnType<typeof classOne>>;

/**
 * Classes a few characteristics anew.
 *
 * @throws Problem 412 naming those that were changed meanwhile; 422 where edits would go without a reason, and for more than a few
 */
export async function reclassCharacteristics(
  sequelize: Sequelize,
  tx: Transaction,
  person: Actor,
  binning: FoundBinning,
  asked: AskedReclassing,
): Promise<void> {
  if (asked.characteristics.length > mostReclassedAtOnce)
    throw invalidField(
      'characteristics',
      'too-many-at-once',
      `At most ${mostReclassedAtOnce} characteristics are classed anew at once. Start a run for more (reclassing-runs).`,
    );
  const found = await lockChosen(sequelize, tx, binning, asked.characteristics);
  requireReason(found, asked.reason);
  const classed = new Map<string, Reclassed>();
  for (const one of found) classed.set(one.id, await classOne(sequelize, one, asked, { tx }));
  await storeReclassed(tx, person, binning, found, classed, asked.reason);
}

/**
 * Starts a run that classes characteristics anew.
 *
 * @throws Problem 412 naming those that were changed meanwhile; 422 where edits would go without a reason
 */
export async function startReclassing(
  context: Pick<Context, 'sequelize' | 'boss'>,
  tx: Transaction,
  asked: AskedReclassing & { readonly person: Actor; readonly binning: FoundBinning; readonly requestId: string },
): Promise<string> {
  const { binning, person, requestId, characteristics, constraints, reason } = asked;
  requireReason(await lockChosen(context.sequelize, tx, binning, characteristics), reason);
  const run = await startRun(context, tx, reclassBinningJob, {
    payload: { binningId: binning.id, characteristics: [...characteristics], constraints, reason },
    person,
    modelId: binning.modelId,
    entity: 'binning',
    entityId: binning.id,
    requestId,
  });
  return run.id;
}

/** The work of that run: nothing is stored before the last one is classed, and nothing where somebody has changed one of them meanwhile. */
export async function reclassInRun(
  asked: AskedReclassing & { readonly binningId: string },
  { context: { sequelize }, run, signal, progress, finish }: RunContext<{ binningId: string; characteristics: number }>,
): Promise<void> {
  progress('Reading the characteristics', null);
  const found = await findCharacteristics(sequelize, asked.binningId, asked.characteristics.map(({ id }) => id)); // prettier-ignore
  const classed = new Map<string, Reclassed>();
  progress('Classing anew', 0);
  await inTurn(found, async (one) => {
    signal.throwIfAborted();
    classed.set(one.id, await classOne(sequelize, one, asked, { signal }));
    progress('Classing anew', classed.size / found.length);
  });
  await finish(async (tx) => {
    const binning = await findBinning(sequelize, asked.binningId, tx);
    if (!binning) throw notFound();
    const now = await lockChosen(sequelize, tx, binning, asked.characteristics);
    await storeReclassed(tx, await actorOf(run.personId, tx), binning, now, classed, asked.reason);
    return { binningId: binning.id, characteristics: now.length };
  });
}

function requireReason(found: readonly FoundCharacteristic[], reason: string): void {
  const edits = found.reduce((sum, one) => sum + one.edits, 0);
  if (edits > 0 && reason === '') {
    throw invalidField(
      'reason',
      'reason-missing',
      `${edits} manual ${edits === 1 ? 'edit' : 'edits'} would no longer be in effect. Say why.`,
    );
  }
}

async function classOne(
  sequelize: Sequelize,
  { id, fine, outOfTime, constraints: { fineClasses } }: FoundCharacteristic,
  asked: Pick<AskedReclassing, 'constraints'>,
  { tx = null, signal }: { readonly tx?: Transaction | null; readonly signal?: AbortSignal },
) {
  const months = await storedMonths(sequelize, id, tx);
  const entry: ReclassFine['characteristics'][number] = {
    fine,
    outOfTime,
    months: months && months.counts,
    constraints: { ...asked.constraints, fineClasses },
  };
  const [classed] = await runInThread('binning.reclass', { characteristics: [entry] }, { signal });
  return classed;
}

async function storeReclassed(
  tx: Transaction,
  person: Actor,
  binning: Pick<FoundBinning, 'modelId'>,
  found: readonly FoundCharacteristic[],
  classed: ReadonlyMap<string, Reclassed>,
  reason: string,
): Promise<void> {
  for (const one of found) {
    const made = classed.get(one.id);
    if (!made) throw new Error(`Characteristic ${one.id} was not classed`);
    const { automatic, constraints, summary, outOfTimeWarnings, outOfTimeCsi } = made;
    const inclusion = inclusionOf(summary, one);
    await BinningCharacteristic.update(
      {
        automatic,
        constraints,
        definition: withBins(one.definition, automatic, automaticClassing(constraints), one.fine.pooled),
        summary,
        outOfTimeWarnings,
        outOfTimeCsi,
        ...inclusion,
        revision: one.revision + 1,
        changedAt: new Date(),
        changedBy: person.id,
      },
      { where: { id: one.id }, transaction: tx },
    );
    await BinningEdit.update({ place: null }, { where: { characteristicId: one.id }, transaction: tx });
    await appendRecord(tx, {
      actor: person,
      action: 'binning.reclassed',
      entity: 'binning-characteristic',
      entityId: one.id,
      modelId: binning.modelId,
      before: binsOfEntry(one.definition, one.fine.pooled),
      after: automatic,
      detail: { column: one.column, constraints, editsDropped: one.edits },
      ...(reason === '' ? {} : { reason }),
    });
    await recordInclusion(tx, person, { id: one.id, modelId: binning.modelId, column: one.column }, one, inclusion);
  }
}
