import type PgBoss from 'pg-boss';
import type { Pool } from 'pg';
import type { Sequelize } from 'sequelize';
import type { Config } from './config/environment';
import { type Database, connect } from './database/connect';
import { Listener } from './database/listener';
import { openQueue } from './jobs/queue';
import type { Log } from './logging/log';
import { configureThreads } from './threads/run-in-thread';

/** What every part of the server works with. Made once per process by `openContext`, handed down, never imported as a global. */
export interface Context {
  readonly config: Config;
  readonly log: Log;
  readonly sequelize: Sequelize;
  readonly pool: Pool;
  /** Sends jobs; the worker also takes them. */
  readonly boss: PgBoss;
  /** Hears NOTIFY. */
  readonly listener: Listener;
  /** Set once the process is asked to stop: readiness ends and nothing new is taken on. */
  readonly stopping: AbortSignal;
  /** Says that the process is about to end. */
  beginStop(): void;
  close(): Promise<void>;
}

/**
 * Opens the database, the queue and the listener as the application's role.
 *
 * @throws when the database cannot be reached or its migrations are behind
 */
export async function openContext(config: Config, log: Log): Promise<Context> {
  configureThreads(config.threads);
  const database: Database = connect(config, log);
  const stop = new AbortController();
  const listener = new Listener(config.databaseUrl, log);
  const boss = await openQueue(config.databaseUrl, log);
  await listener.open();
  return {
    config,
    log,
    sequelize: database.sequelize,
    pool: database.pool,
    boss,
    listener,
    stopping: stop.signal,
    beginStop: () => stop.abort(),
    async close() {
      stop.abort();
      await listener.close();
      await boss.stop({ graceful: false });
      await database.close();
    },
  };
}
