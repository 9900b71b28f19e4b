import type { Edit } from '@tallystone/contracts/binnings/edits';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';

export interface StoredEdit extends Omit<Edit, 'at' | 'inEffect'> {
  readonly characteristicId: string;
  readonly place: number | null;
  readonly at: Date;
}

const select = `
  SELECT e.id, e.characteristic_id AS "characteristicId", e.place, e.kind, e.what, e.before, e.after, e.reason, p.name AS by, e.made_at AS at,
         e.not_carried AS "notCarried",
         CASE WHEN f.id IS NOT NULL THEN json_build_object(
           'binning', b.name, 'by', o.name, 'at', to_char(f.made_at AT TIME ZONE 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.MS"Z"')) END AS "carriedFrom"
    FROM binning_edits e JOIN people p ON p.id = e.made_by
    LEFT JOIN binning_edits f ON f.id = e.carried_from
    LEFT JOIN people o ON o.id = f.made_by
    LEFT JOIN binning_characteristics c ON c.id = f.characteristic_id
    LEFT JOIN binnings b ON b.id = c.binning_id`;

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

/** Edits of the earlier binning that make no sense here. */
export function editsNotCarried(
  sequelize: Sequelize,
  characteristicId: string,
  tx: Transaction | null = null,
): Promise<StoredEdit[]> {
  return rows(
    sequelize,
    `${select} WHERE e.characteristic_id = $1 AND e.not_carried IS NOT NULL ORDER BY e.sequence`,
    [characteristicId],
    tx,
  );
}

/** Every edit, undone ones included, latest first. */
export function allEdits(sequelize: Sequelize, characteristicId: string, tx: Transaction | null = null): Promise<StoredEdit[]> {
  return rows(sequelize, `${select} WHERE e.characteristic_id = $1 ORDER BY e.sequence DESC LIMIT 1000`, [characteristicId], tx);
}

/** Every edit of a binning with its characteristic, undone ones included, latest first. */
export function allEditsOfBinning(
  sequelize: Sequelize,
  binningId: string,
): Promise<(StoredEdit & { readonly column: string })[]> {
  return rows(
    sequelize,
    `SELECT edits.*, own.column_name AS "column" FROM (${select}) edits
       JOIN binning_characteristics own ON own.id = edits."characteristicId"
       JOIN binning_edits entered ON entered.id = edits.id
      WHERE own.binning_id = $1 ORDER BY entered.sequence DESC LIMIT 2000`,
    [binningId],
  );
}

/** Edits by their ids, of whichever characteristic. */
export function editsById(sequelize: Sequelize, ids: readonly string[], tx: Transaction): Promise<StoredEdit[]> {
  return ids.length === 0 ? Promise.resolve([]) : rows(sequelize, `${select} WHERE e.id = ANY($1::uuid[])`, [ids], tx);
}
