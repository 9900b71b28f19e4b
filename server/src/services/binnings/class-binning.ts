import { randomUUID } from 'node:crypto';
import type { Sequelize, Transaction } from 'sequelize';
import type { RunContext } from '../../jobs/handler';
import { Binning, BinningCharacteristic } from '../../models/binning';
import { permittedOn } from '../permissions/permitted';
import { actorOf } from '../people/actor-of';
import { appendRecord } from '../record/append';
import { findDefinition, loadPrepared } from '../samples/definitions';
import { splitColumns } from './barred';
import { type EarlierCharacteristic, readEarlier, storeCarried } from './carry-over';
import { classCharacteristics } from './class-characteristics';
import { loadRowMonths, storeMonths } from './months';

type Classed = Awaited<ReturnType<typeof classCharacteristics>>;
export interface ClassedBinning extends Classed {
  readonly binning: Binning;
  readonly earlier: ReadonlyMap<string, EarlierCharacteristic>;
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
  return { binning, earlier, ...classed };
}

/** Writes the bins, once, in the transaction that ends the run. */
export async function storeClassing(
  sequelize: Sequelize,
  tx: Transaction,
  run: { readonly personId: string },
  { binning, earlier, classed, unusable }: ClassedBinning,
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
        const oneBin = summary.warnings.find(({ code }) => code === 'one-bin');
        const before = earlier.get(column);
        const leftOut = oneBin?.message ?? (before?.included === false ? before.leftOutReason : null);
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
          included: leftOut === null,
          leftOutReason: leftOut ?? '',
          changedBy: run.personId,
        };
      },
    ),
    { transaction: tx },
  );
  for (const { id, months } of entered) await storeMonths(sequelize, tx, id, months);
  await Binning.update(
    { readyAt: new Date(), barred: [...binning.barred, ...unusable] },
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
  for (const { id, column, carried } of entered) {
    const before = earlier.get(column);
    if (before) await storeCarried(tx, person, { id, modelId: binning.modelId, column }, before, carried);
  }
  return { binningId, characteristics: classed.length };
}
