import { Transaction, type Sequelize } from 'sequelize';

/** Runs work in one transaction (read committed) that is rolled back when the work throws. */
export function inTransaction<T>(sequelize: Sequelize, work: (tx: Transaction) => Promise<T>): Promise<T> {
  return sequelize.transaction({ isolationLevel: Transaction.ISOLATION_LEVELS.READ_COMMITTED }, work);
}
