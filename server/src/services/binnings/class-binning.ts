import { randomUUID } from 'node:crypto';
import type { Sequelize, Transaction } from 'sequelize';
import type { RunContext } from '../../jobs/handler';
import { Binning, BinningCharacteristic } from '../../models/binning';
import type { NotHere } from '@tallystone/contracts/binnings/schema';
import type { ColumnRole } from '@tallystone/contracts/samples/columns';
import { permittedOn } from '../permissions/permitted';
import { actorOf } from '../people/actor-of';
import { appendRecord } from '../record/append';
import { findDefinition, loadPrepared } from '../samples/definitions';
import { type Barred, splitColumns } from './barred';
import { type EarlierCharacteristic, readEarlier, storeCarried } from './carry-over';
import { classCharacteristics } from './class-characteristics';
import { inclusionOf } from './inclusion';
import { loadRowMonths, storeMonths } from './months';

type Classed = Awaited<ReturnType<typeof classCharacteristics>>;
export interface ClassedBinning extends Classed {
  readonly binning: Binning;
  readonly earlier: ReadonlyMap<string, EarlierCharacteristic>;
  /** Of the sample's columns. */
  readonly roles: ReadonlyMap<string, ColumnRole>;
}

/** Classes every characteristic that a binning takes. Nothing is stored before the last one is classed. */
export async function classBinning(
  binningId: string,
  { context, signal, progress }: Pick<RunContext<unknown>, 'context' | 'signal' | 'progress'>,
): Promise<ClassedBinning> {
  const { sequelize } = context;
  progress('Reading the sample', null);
  const binning = await Binning.findByPk(binningId, { rejectOnEmpty: true });
  const definition = await findDefinition(sequelize, binning.definitionId);
  if (!definition) throw new Error(`Binning ${binningId} has no sample definition`);
  const counted = await loadPrepared(sequelize, definition.id);
  const { taken } = splitColumns(definition.content.columns, await permittedOn(sequelize, definition.id));
  const earlier = await readEarlier(sequelize, binning.fromBinningId);
  progress('Classing characteristics', 0);
  const classed = await classCharacteristics(
    sequelize,
    {
      sampleId: definition.sampleId,
      data: definition.content.data,
      counted,
      columns: taken,
      constraints: binning.constraints,
      months: await loadRowMonths(sequelize, definition.sampleId, definition.content),
      earlier,
    },
    { signal, onDone: (done) => progress('Classing characteristics', done / taken.length) },
  );
  const roles = new Map(definition.content.columns.map(({ column, role }) => [column, role]));
  return { binning, earlier, roles, ...classed };
}

/** Writes the bins, once, in the transaction that ends the run. */
export async function storeClassing(
  sequelize: Sequelize,
  tx: Transaction,
  run: { readonly personId: string },
  { binning, earlier, roles, classed, unusable }: ClassedBinning,
): Promise<{ binningId: string; characteristics: number }> {
  const binningId = binning.id;
  const entered = classed.map((one) => ({ ...one, id: randomUUID() }));
  await BinningCharacteristic.bulkCreate(
    entered.map(
      ({
        id,
        column,
        kind,
        position,
        definition: entry,
        automatic,
        constraints,
        fine,
        outOfTime,
        summary,
        outOfTimeWarnings,
        outOfTimeCsi,
      }) => {
        return {
          id,
          binningId,
          position,
          columnName: column,
          kind,
          definition: entry,
          automatic,
          constraints,
          fine,
          outOfTime,
          summary,
          outOfTimeWarnings,
          outOfTimeCsi,
          // That bins of the earlier sample told nobody apart says nothing of these.
          ...inclusionOf(summary, earlier.get(column) ?? null),
          changedBy: run.personId,
        };
      },
    ),
    { transaction: tx },
  );
  for (const { id, months } of entered) await storeMonths(sequelize, tx, id, months);
  const barred = [...binning.barred, ...unusable];
  const notHere = decisionsNotHere(earlier, new Set(entered.map(({ column }) => column)), barred, roles);
  await Binning.update(
    { readyAt: new Date(), barred, notHere },
    { where: { id: binningId }, transaction: tx },
  );
  const person = await actorOf(run.personId, tx);
  await appendRecord(tx, {
    actor: person,
    action: 'binning.classed',
    entity: 'binning',
    entityId: binningId,
    modelId: binning.modelId,
    after: { characteristics: classed.length },
  });
  for (const { why, ...detail } of notHere)
    await appendRecord(tx, { actor: person, action: 'binning.not-carried', entity: 'binning', entityId: binningId, modelId: binning.modelId, detail, reason: why });
  for (const { id, column, carried } of entered) {
    const before = earlier.get(column);
    if (before) await storeCarried(tx, person, { id, modelId: binning.modelId, column }, before, carried);
  }
  return { binningId, characteristics: classed.length };
}

/** What the earlier binning decided about columns that this one does not class: said, because it has no place here. */
function decisionsNotHere(
  earlier: ReadonlyMap<string, EarlierCharacteristic>,
  here: ReadonlySet<string>,
  barred: readonly Barred[],
  roles: ReadonlyMap<string, ColumnRole>,
): NotHere[] {
  const decided = [...earlier].sort(([a], [b]) => (a < b ? -1 : 1));
  return decided.flatMap(([column, { stored, included, leftOutReason, inclusionDecided }]) => {
    const leftOut = inclusionDecided && !included ? leftOutReason : null;
    if (here.has(column) || (stored.length === 0 && leftOut === null)) return [];
    const role = roles.get(column);
    const why =
      barred.find((one) => one.column === column)?.reason ??
      (role === undefined ? 'The sample has no such column.' : `In this sample it has the role “${role}”.`);
    return [{ column, edits: stored.length, leftOut, why }];
  });
}
