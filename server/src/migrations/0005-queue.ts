import PgBoss from 'pg-boss';
import type { Migration } from './migration';

const twoWeeks = 14 * 24 * 60;

/**
 * Few and fixed, because each is a partition that only the owner can make: a new kind of work chooses one of them and needs no migration.
 * How often a run is tried again is decided by the run itself (jobs/sweep.ts), so pg-boss never retries one.
 */
const queues = [
  { name: 'long', options: { policy: 'standard', retryLimit: 0, expireInSeconds: 23 * 3600, retentionMinutes: twoWeeks } },
  { name: 'short', options: { policy: 'standard', retryLimit: 0, expireInSeconds: 3600, retentionMinutes: twoWeeks } },
  {
    name: 'mail',
    options: {
      policy: 'standard',
      retryLimit: 12,
      retryDelay: 5,
      retryBackoff: true,
      expireInSeconds: 60,
      retentionMinutes: twoWeeks,
    },
  },
];

/**
 * The tables of pg-boss and one partition for each queue, made by the owner: the application starts pg-boss with `migrate: false` and may
 * neither create nor drop.
 */
export const queue: Migration = {
  name: '0005-queue',
  // pg-boss states its tables as one script with a transaction of its own.
  transactional: false,
  async up({ sql, app }) {
    const [{ there }] = await sql(`SELECT to_regclass('pgboss.version') IS NOT NULL AS there`);
    if (!there) await sql(PgBoss.getConstructionPlans('pgboss'));
    for (const { name, options } of queues) await sql(`SELECT pgboss.create_queue('${name}', '${JSON.stringify(options)}')`);
    await sql(`GRANT USAGE ON SCHEMA pgboss TO ${app}`);
    await sql(`GRANT SELECT ON pgboss.queue, pgboss.schedule, pgboss.subscription TO ${app}`);
    await sql(`GRANT SELECT, UPDATE ON pgboss.version TO ${app}`);
    await sql(`GRANT SELECT, INSERT, UPDATE, DELETE ON pgboss.job, pgboss.archive TO ${app}`);
  },
};
