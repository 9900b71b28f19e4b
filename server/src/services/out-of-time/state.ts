import type { OutOfTimeState } from '@tallystone/contracts/out-of-time/schema';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';

/** True once somebody has opened the out-of-time figures of a sample definition; until then no service hands any of them out. */
export async function outOfTimeOpened(
  sequelize: Sequelize,
  definitionId: string,
  tx: Transaction | null = null,
): Promise<boolean> {
  const [found] = await rows<{ opened: boolean }>(
    sequelize,
    'SELECT EXISTS (SELECT 1 FROM out_of_time_openings WHERE definition_id = $1) AS opened',
    [definitionId],
    tx,
  );
  return found.opened;
}

/** "none" where the definition has no such rows. */
export async function outOfTimeState(
  sequelize: Sequelize,
  definitionId: string,
  tx: Transaction | null = null,
): Promise<OutOfTimeState> {
  const [found] = await rows<{ rows: number; opened: boolean }>(
    sequelize,
    `SELECT (counts #>> '{partitions,outOfTime,rows}')::int AS rows,
            EXISTS (SELECT 1 FROM out_of_time_openings o WHERE o.definition_id = d.id) AS opened
       FROM sample_definitions d WHERE id = $1`,
    [definitionId],
    tx,
  );
  if (!found || found.rows === 0) return 'none';
  return found.opened ? 'opened' : 'covered';
}
