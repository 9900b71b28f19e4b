import type { RunEvent } from '@tallystone/contracts/runs/schema';
import type { Sequelize } from 'sequelize';
import { rows } from '../../database/sql';

/** Events of a person after one they have seen, oldest first, at most 500. */
export async function eventsAfter(
  sequelize: Sequelize,
  personId: string,
  after: number,
): Promise<{ id: number; data: RunEvent }[]> {
  const found = await rows<{ id: string; data: RunEvent }>(
    sequelize,
    'SELECT id, data FROM run_events WHERE person_id = $1 AND id > $2 ORDER BY id LIMIT 500',
    [personId, after],
  );
  return found.map(({ id, data }) => ({ id: Number(id), data }));
}

/** Where a new reader begins; what is under way they read from the list of runs. */
export async function latestEventId(sequelize: Sequelize, personId: string): Promise<number> {
  const [{ last }] = await rows<{ last: string }>(
    sequelize,
    'SELECT coalesce(max(id), 0) AS last FROM run_events WHERE person_id = $1',
    [personId],
  );
  return Number(last);
}
