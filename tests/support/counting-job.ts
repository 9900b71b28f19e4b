import { z } from 'zod';
import { defineJob } from '../../server/src/jobs/definitions/job';
import { handle } from '../../server/src/jobs/handler';
import { rows } from '../../server/src/database/sql';
import { RecordRow } from '../../server/src/models/record';

/** Work that can be watched: counts in steps and then writes one row, so that a test sees how often it was really done. */
export const countingJob = defineJob({
  kind: 'test.count',
  queue: 'long',
  payload: z.strictObject({ steps: z.int(), pause: z.int(), fail: z.boolean().default(false) }),
  result: z.strictObject({ counted: z.int() }),
});

export const countingTables = `
  CREATE TABLE counted (run_id uuid NOT NULL, attempt integer NOT NULL, what text NOT NULL);
  GRANT SELECT, INSERT, DELETE ON counted TO tallystone_app;`;

export const counting = handle(countingJob, {
  async work({ steps, pause, fail }, { context, run, attempt, signal, progress, write, finish }) {
    const note = (what: string) =>
      write((tx) =>
        rows(context.sequelize, 'INSERT INTO counted VALUES ($1, $2, $3) RETURNING attempt', [run.id, attempt, what], tx),
      );
    await note('begun');
    for (let step = 0; step < steps; step++) {
      signal.throwIfAborted();
      progress('Counting', step / steps);
      await new Promise((resolve) => setTimeout(resolve, pause));
    }
    if (fail) throw new Error('counted wrong');
    await finish(async (tx) => {
      await rows(context.sequelize, `INSERT INTO counted VALUES ($1, $2, 'done') RETURNING attempt`, [run.id, attempt], tx);
      return { counted: steps };
    });
  },
  async abandon(tx, run) {
    await rows(RecordRow.sequelize!, `DELETE FROM counted WHERE run_id = $1 RETURNING attempt`, [run.id], tx);
    await rows(
      RecordRow.sequelize!,
      `INSERT INTO counted VALUES ($1, 0, $2) RETURNING attempt`,
      [run.id, `abandoned ${run.outcome}`],
      tx,
    );
  },
});
