import type { Edit } from '@tallystone/contracts/binnings/edits';
import type { BinningHistory, EditEnd } from '@tallystone/contracts/binnings/schema';
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

/** An edit in the history of a whole binning. */
export interface HistoricEdit extends StoredEdit {
  readonly column: string;
  readonly ended: (Omit<EditEnd, 'at'> & { readonly at: Date }) | null;
}

/**
 * Every edit of a binning with its characteristic, undone ones included, latest first, at most 2,000. Who ended one, and why, is what the record says
 * first after the edit was last made: it was undone, or its characteristic was classed anew.
 */
export async function allEditsOfBinning(sequelize: Sequelize, binningId: string): Promise<HistoricEdit[]> {
  const found = await rows<
    StoredEdit & { column: string; how: string | null; endedBy: string; endedAt: Date; endedWhy: string | null }
  >(
    sequelize,
    `SELECT edits.*, own.column_name AS "column", ended.action AS how, ended.actor_name AS "endedBy", ended.at AS "endedAt", ended.reason AS "endedWhy"
       FROM (${select}) edits
       JOIN binning_characteristics own ON own.id = edits."characteristicId"
       JOIN binning_edits entered ON entered.id = edits.id
       LEFT JOIN LATERAL (
         SELECT r.action, r.actor_name, r.at, r.reason FROM record r
          WHERE r.entity = 'binning-characteristic' AND r.entity_id = own.id::text
            AND (r.action = 'binning.reclassed' OR (r.action = 'binning.edit-undone' AND r.detail ->> 'edit' = edits.id::text))
            AND r.sequence > (
              SELECT max(m.sequence) FROM record m
               WHERE m.entity = 'binning-characteristic' AND m.entity_id = own.id::text AND m.detail ->> 'edit' = edits.id::text
                 AND m.action IN ('binning.edited', 'binning.edit-redone', 'binning.edit-carried'))
          ORDER BY r.sequence LIMIT 1
       ) ended ON edits.place IS NULL
      WHERE own.binning_id = $1 ORDER BY entered.sequence DESC LIMIT 2000`,
    [binningId],
  );
  return found.map(({ how, endedBy, endedAt, endedWhy, ...edit }) => ({
    ...edit,
    ended:
      how === null
        ? null
        : {
            how: how === 'binning.reclassed' ? ('classed anew' as const) : ('undone' as const),
            by: endedBy,
            at: endedAt,
            reason: endedWhy,
          },
  }));
}

export const presentHistoric = ({ column, ended, ...edit }: HistoricEdit): BinningHistory['edits'][number] => ({
  ...presentEdit(edit),
  column,
  characteristicId: edit.characteristicId,
  ended: ended && { ...ended, at: ended.at.toISOString() },
});

/** Edits by their ids, of whichever characteristic. */
export function editsById(sequelize: Sequelize, ids: readonly string[], tx: Transaction): Promise<StoredEdit[]> {
  return ids.length === 0 ? Promise.resolve([]) : rows(sequelize, `${select} WHERE e.id = ANY($1::uuid[])`, [ids], tx);
}
