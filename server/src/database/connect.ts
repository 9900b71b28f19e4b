import { Pool } from 'pg';
import { Sequelize } from 'sequelize';
import type { Config } from '../config/environment';
import type { Log } from '../logging/log';
import { defineModels } from '../models/index';

export interface Database {
  readonly sequelize: Sequelize;
  /** Connections beside Sequelize's: for the session store and for what must not wait behind open transactions. */
  readonly pool: Pool;
  close(): Promise<void>;
}

/** Opens the database as the application's role. Connections are made when first needed and made anew when the server went away. */
export function connect(config: Config, log: Log): Database {
  const sequelize = new Sequelize(config.databaseUrl, {
    dialect: 'postgres',
    logging: false,
    pool: { max: config.databasePool, min: 0, idle: 10_000, acquire: 15_000 },
    dialectOptions: { application_name: 'tallystone', keepAlive: true },
    define: { underscored: true, timestamps: false, freezeTableName: true },
  });
  defineModels(sequelize);
  const pool = new Pool({
    connectionString: config.databaseUrl,
    max: 6,
    application_name: 'tallystone-pool',
    connectionTimeoutMillis: 10_000,
    keepAlive: true,
  });
  // An idle connection that the server closes raises this; unheard it would end the process.
  pool.on('error', (error) => log.warn({ err: error }, 'a database connection was lost'));
  return {
    sequelize,
    pool,
    async close() {
      await sequelize.close();
      await pool.end();
    },
  };
}
