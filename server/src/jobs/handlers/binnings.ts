import { Binning, BinningCharacteristic } from '../../models/binning';
import { splitColumns } from '../../services/binnings/barred';
import { classCharacteristics } from '../../services/binnings/class-characteristics';
import { actorOf } from '../../services/people/actor-of';
import { appendRecord } from '../../services/record/append';
import { findDefinition, loadPrepared } from '../../services/samples/definitions';
import { classBinningJob } from '../definitions/binnings';
import { handle } from '../handler';

/** Nothing is stored before the last characteristic is classed, so an attempt that ends early leaves nothing behind. */
export const classBinning = handle(classBinningJob, {
  async work({ binningId }, { context, run, signal, progress, finish }) {
    const { sequelize } = context;
    progress('Reading the sample', null);
    const binning = await Binning.findByPk(binningId, { rejectOnEmpty: true });
    const definition = await findDefinition(sequelize, binning.definitionId);
    if (!definition) throw new Error(`Binning ${binningId} has no sample definition`);
    const counted = await loadPrepared(sequelize, definition.id);
    const { taken } = splitColumns(definition.content.columns);
    progress('Classing characteristics', 0);
    const { classed, unusable } = await classCharacteristics(
      sequelize,
      { sampleId: definition.sampleId, data: definition.content.data, counted, columns: taken, constraints: binning.constraints },
      { signal, onDone: (done) => progress('Classing characteristics', done / taken.length) },
    );
    await finish(async (tx) => {
      await BinningCharacteristic.bulkCreate(
        classed.map(({ column, kind, position, definition: entry, automatic, constraints, fine, outOfTime, summary, outOfTimeWarnings }) => {
          const oneBin = summary.warnings.find(({ code }) => code === 'one-bin');
          return {
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
            included: oneBin === undefined,
            leftOutReason: oneBin?.message ?? '',
            changedBy: run.personId,
          };
        }),
        { transaction: tx },
      );
      await Binning.update(
        { readyAt: new Date(), barred: [...binning.barred, ...unusable] },
        { where: { id: binningId }, transaction: tx },
      );
      await appendRecord(tx, {
        actor: await actorOf(run.personId, tx),
        action: 'binning.classed',
        entity: 'binning',
        entityId: binningId,
        modelId: binning.modelId,
        after: { characteristics: classed.length },
      });
      return { binningId, characteristics: classed.length };
    });
  },
});
