import { Engine } from './engine';
import { FoldSheet, type FoldBatch } from './fold-batch';

/**
 * The work of a helping thread on folds that it was sent: the same numbers as in the owner's thread. What goes wrong is told by the sheet, and the owner does
 * the folds itself.
 * @example parentPort.on('message', (batch) => helpFolds(batch))
 */
export function helpFolds(batch: FoldBatch): void {
  const { problem, folds, lambdas, guide, first, end, tolerance, values, withFits } = batch;
  const sheet = new FoldSheet(batch.sheet, lambdas.length, withFits ? problem.columns.length : 0);
  if (!sheet.take()) return;
  try {
    const engine = new Engine(problem, { folds });
    engine.folds.followBatch(
      { guide, lambdas, first, end, tolerance, valuesFor: (fold) => values[fold - first] },
      {
        onArrival: ({ fold, place, deviance, residual, fit }) =>
          sheet.write(fold - first, place, deviance, residual, withFits ? fit() : null),
        onFailure: (fold, place) => {
          for (let k = place; k < lambdas.length; k++) sheet.write(fold - first, k, NaN, NaN, null);
        },
      },
    );
    engine.close();
    sheet.finish(true);
  } catch {
    // Whatever it was, the owner meets it too when it does the batch itself, and can say so.
    sheet.finish(false);
  }
}
