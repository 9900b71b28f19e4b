import type { Edit } from '@tallystone/contracts/binnings/edits';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';

export interface StoredEdit extends Omit<Edit, 'at' | 'inEffect'> {
  readonly characteristicId: string;
  readonly place: number | null;
  readonly at: Date;
}

const select = `
  SELECT e.id, e.characteristic_id AS "characteristicId", e.place, e.kind, e.what, e.before, e.after, e.reason, p.name AS by, e.made_at AS at
    FROM binning_edits e JOIN people p ON p.id = e.made_by`;

export const presentEdit = ({ characteristicId: _characteristicId, place, at, ...edit }: StoredEdit): Edit => ({
  ...edit,
  at: at.toISOString(),
  inEffect: place !== null,
});

/** Edits in effect, oldest first. */
export function editsInEffect(
  sequelize: Sequelize,
  characteristicId: string,
  tx: Transaction | null = null,
): Promise<StoredEdit[]> {
  return rows(
    sequelize,
    `${select} WHERE e.characteristic_id = $1 AND e.place IS NOT NULL ORDER BY e.place`,
    [characteristicId],
    tx,
  );
}

/** Every edit, undone ones included, latest first. */
export function allEdits(sequelize: Sequelize, characteristicId: string, tx: Transaction | null = null): Promise<StoredEdit[]> {
  return rows(sequelize, `${select} WHERE e.characteristic_id = $1 ORDER BY e.sequence DESC LIMIT 1000`, [characteristicId], tx);
}

/** Edits by their ids, of whichever characteristic. */
export function editsById(sequelize: Sequelize, ids: readonly string[], tx: Transaction): Promise<StoredEdit[]> {
  return ids.length === 0 ? Promise.resolve([]) : rows(sequelize, `${select} WHERE e.id = ANY($1::uuid[])`, [ids], tx);
}
