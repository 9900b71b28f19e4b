import type { Transaction } from 'sequelize';

/** What a migration works with. */
export interface MigrationStep {
  /** Runs SQL as the owner, inside the migration's transaction (outside of one when the migration says so). */
  sql(text: string): Promise<Record<string, unknown>[]>;
  /** Quoted name of the role the application works as: every migration GRANTs to it what the application needs, and no more. */
  readonly app: string;
  readonly transaction: Transaction | null;
}

/**
 * One forward step of the schema. There is no way back: a wrong step is followed by a right one.
 */
export interface Migration {
  /** `NNNN-what-it-does`; also the order. */
  readonly name: string;
  /** False only where PostgreSQL or a package demands it; such a step must be safe to run twice. */
  readonly transactional?: boolean;
  up(step: MigrationStep): Promise<void>;
}
