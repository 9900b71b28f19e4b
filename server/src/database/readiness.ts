import type { Sequelize } from 'sequelize';
import { migrations } from '../migrations/index';
import { rows } from './sql';

/** Whether the database answers and its schema is the one this build works with. */
export async function readiness(sequelize: Sequelize): Promise<'ok' | 'starting' | 'unavailable'> {
  try {
    const [{ applied }] = await rows<{ applied: number }>(sequelize, 'SELECT count(*)::int AS applied FROM migrations');
    return applied >= migrations.length ? 'ok' : 'starting';
  } catch {
    return 'unavailable';
  }
}
