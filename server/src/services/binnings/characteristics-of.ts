import type { BinnedCharacteristic } from '@tallystone/contracts/specification/types';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';

/** One characteristic that a fit may take. */
export interface IncludedCharacteristic {
  readonly id: string;
  /** Its entry of a specification, as it is now. */
  readonly definition: BinnedCharacteristic;
  readonly revision: number;
}

/**
 * The characteristics that a binning includes, in the order of the sample's columns. Barred columns are never among them: they are not
 * classed at all.
 */
export function binningCharacteristics(
  sequelize: Sequelize,
  binningId: string,
  tx: Transaction | null = null,
): Promise<IncludedCharacteristic[]> {
  return rows<IncludedCharacteristic>(
    sequelize,
    'SELECT id, definition, revision FROM binning_characteristics WHERE binning_id = $1 AND included ORDER BY position',
    [binningId],
    tx,
  );
}

/** Manual edits in effect that have no reason yet, of characteristics that are included: what stands in the way of submitting. */
export function editsWithoutReason(
  sequelize: Sequelize,
  binningId: string,
  tx: Transaction | null = null,
): Promise<{ characteristicId: string; column: string; what: string }[]> {
  return rows(
    sequelize,
    `SELECT c.id AS "characteristicId", c.column_name AS "column", e.what
       FROM binning_edits e JOIN binning_characteristics c ON c.id = e.characteristic_id
      WHERE c.binning_id = $1 AND c.included AND e.place IS NOT NULL AND e.reason IS NULL ORDER BY c.position, e.place`,
    [binningId],
    tx,
  );
}
