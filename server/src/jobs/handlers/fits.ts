import { fitPath, storePath } from '../../services/fits/fit-path';
import { fitPathJob } from '../definitions/fits';
import { handle } from '../handler';

export const fitPenaltyPath = handle(fitPathJob, {
  async work({ fitId }, { context, run, attempt, signal, progress, finish }) {
    const fitted = await fitPath(context.sequelize, fitId, { signal, onProgress: progress });
    await finish(async (tx) => {
      await storePath(tx, fitId, { id: run.id, attempt }, fitted);
      return { fitId, penalties: fitted.path.lambdas.length, stoppedEarly: fitted.path.stoppedEarly };
    });
  },
});
