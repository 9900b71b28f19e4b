import PgBoss from 'pg-boss';
import type { Sequelize, Transaction } from 'sequelize';
import type { Log } from '../logging/log';

/**
 * pg-boss as the application's role: its tables and queues were made by a migration, so it may neither migrate nor keep schedules.
 */
export async function openQueue(url: string, log: Log): Promise<PgBoss> {
  const boss = new PgBoss({
    connectionString: url,
    application_name: 'tallystone-queue',
    max: 3,
    migrate: false,
    schedule: false,
    supervise: true,
  });
  boss.on('error', (error) => log.warn({ err: error }, 'the queue met an error'));
  await boss.start();
  return boss;
}

/** Lets pg-boss write within a transaction of ours: a job and the row it is about are there both or not at all. */
export function within(sequelize: Sequelize, tx: Transaction): PgBoss.Db {
  return {
    executeSql: async (text, values) => {
      const [rows] = await sequelize.query(text, {
        bind: values.map((value: unknown) => (value === undefined ? null : value)),
        transaction: tx,
      });
      return { rows: Array.isArray(rows) ? rows : [] };
    },
  };
}
