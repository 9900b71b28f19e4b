import { Client } from 'pg';
import { Sequelize } from 'sequelize';
import { Umzug } from 'umzug';
import { migrations } from './index';
import type { Migration, MigrationStep } from './migration';

const lock = 7_415_001;

/**
 * Brings the schema of a database up to date, as its owner. Several processes may ask at once: an advisory lock lets one work while the
 * others wait, find nothing left to do and go on.
 *
 * @param ownerUrl address of the database, signed in as the owner of its tables
 * @param appUrl address the application uses; its role is granted what it needs
 * @returns names of the migrations applied now
 */
export async function migrate(ownerUrl: string, appUrl: string, list: readonly Migration[] = migrations): Promise<string[]> {
  const guard = new Client({ connectionString: ownerUrl, application_name: 'tallystone-migrate' });
  await guard.connect();
  const sequelize = new Sequelize(ownerUrl, { dialect: 'postgres', logging: false, pool: { max: 1 } });
  try {
    await guard.query('SELECT pg_advisory_lock($1)', [lock]);
    await sequelize.query(
      'CREATE TABLE IF NOT EXISTS migrations (name text PRIMARY KEY, applied_at timestamptz NOT NULL DEFAULT now())',
    );
    const app = quoteName(decodeURIComponent(new URL(appUrl).username));
    await sequelize.query(`GRANT SELECT ON migrations TO ${app}`);
    const umzug = new Umzug({
      migrations: list.map((migration) => ({ name: migration.name, up: () => apply(sequelize, migration, app) })),
      storage: {
        // Written within the step's own transaction by apply(), so that a crash leaves neither half.
        logMigration: async () => undefined,
        unlogMigration: () => Promise.reject(new Error('Migrations go forward only')),
        executed: async () =>
          (await select(sequelize, 'SELECT name FROM migrations ORDER BY name')).map((row) => String(row['name'])),
      },
      logger: undefined,
    });
    return (await umzug.up()).map((done) => done.name);
  } finally {
    await sequelize.close();
    await guard.end();
  }
}

async function apply(sequelize: Sequelize, migration: Migration, app: string): Promise<void> {
  const log = `INSERT INTO migrations (name) VALUES ('${migration.name}')`;
  if (migration.transactional === false) {
    await migration.up({ sql: (text) => select(sequelize, text), app, transaction: null });
    await sequelize.query(log);
    return;
  }
  await sequelize.transaction(async (transaction) => {
    const sql: MigrationStep['sql'] = async (text) => {
      const [rows] = await sequelize.query(text, { transaction });
      return Array.isArray(rows) ? (rows as Record<string, unknown>[]) : [];
    };
    await migration.up({ sql, app, transaction });
    await sequelize.query(log, { transaction });
  });
}

async function select(sequelize: Sequelize, text: string): Promise<Record<string, unknown>[]> {
  const [rows] = await sequelize.query(text);
  return Array.isArray(rows) ? (rows as Record<string, unknown>[]) : [];
}

const quoteName = (name: string): string => `"${name.replaceAll('"', '""')}"`;
