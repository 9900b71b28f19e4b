import type { Bins, Constraints, Fine, SlotCounts } from '@tallystone/contracts/binnings/bins';
import type { Warning } from '@tallystone/contracts/binnings/schema';
import type { BinnedCharacteristic } from '@tallystone/contracts/specification/types';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';
import type { StoredSummary } from '../../models/binning';
import { type FoundBinning, findBinning } from './find-binning';

/** What the list shows of a characteristic: no fine classes. */
export interface ListedCharacteristic {
  readonly id: string;
  readonly column: string;
  readonly kind: 'numeric' | 'categorical';
  readonly position: number;
  readonly included: boolean;
  readonly leftOutReason: string;
  /** By a person, other than the bins alone would have it. */
  readonly inclusionDecided: boolean;
  readonly summary: StoredSummary;
  readonly outOfTimeWarnings: Warning[];
  readonly outOfTimeCsi: number | null;
  readonly edits: number;
  readonly editsWithoutReason: number;
  readonly notCarried: number;
  readonly revision: number;
}

/** A characteristic with all that the bench and a save need. Out-of-time counts lie apart from `fine`. */
export interface FoundCharacteristic extends ListedCharacteristic {
  readonly binningId: string;
  readonly definition: BinnedCharacteristic;
  readonly automatic: Bins;
  readonly constraints: Constraints;
  readonly fine: Fine;
  readonly outOfTime: SlotCounts;
  readonly changedBy: string;
  readonly changedAt: Date;
}

const listed = `
  c.id, c.column_name AS "column", c.kind, c.position, c.included, c.left_out_reason AS "leftOutReason",
  c.inclusion_decided AS "inclusionDecided", c.summary,
  c.out_of_time_warnings AS "outOfTimeWarnings", c.out_of_time_csi AS "outOfTimeCsi", c.revision,
  (SELECT count(*)::int FROM binning_edits e WHERE e.characteristic_id = c.id AND e.place IS NOT NULL) AS edits,
  (SELECT count(*)::int FROM binning_edits e WHERE e.characteristic_id = c.id AND e.place IS NOT NULL AND e.reason IS NULL) AS "editsWithoutReason",
  (SELECT count(*)::int FROM binning_edits e WHERE e.characteristic_id = c.id AND e.not_carried IS NOT NULL) AS "notCarried"`;
const whole = `${listed}, c.binning_id AS "binningId", c.definition, c.automatic, c.constraints, c.fine, c.out_of_time AS "outOfTime",
  p.name AS "changedBy", c.changed_at AS "changedAt"`;

export function listCharacteristics(
  sequelize: Sequelize,
  binningId: string,
  tx: Transaction | null = null,
): Promise<ListedCharacteristic[]> {
  return rows(
    sequelize,
    `SELECT ${listed} FROM binning_characteristics c WHERE c.binning_id = $1 ORDER BY c.position`,
    [binningId],
    tx,
  );
}

/** What an earlier binning decided about each characteristic; with its counts where somebody edited it. */
export function decidedEarlier(
  sequelize: Sequelize,
  binningId: string,
): Promise<
  (Pick<FoundCharacteristic, 'id' | 'column' | 'constraints' | 'included' | 'leftOutReason' | 'inclusionDecided'> & {
    fine: Fine | null;
  })[]
> {
  return rows(
    sequelize,
    `SELECT c.id, c.column_name AS "column", c.constraints, c.included, c.left_out_reason AS "leftOutReason", c.inclusion_decided AS "inclusionDecided",
            CASE WHEN EXISTS (SELECT 1 FROM binning_edits e WHERE e.characteristic_id = c.id AND e.place IS NOT NULL) THEN c.fine END AS fine
       FROM binning_characteristics c WHERE c.binning_id = $1`,
    [binningId],
  );
}

export interface OnBench {
  readonly binning: FoundBinning;
  readonly characteristic: FoundCharacteristic;
}

/** The characteristic with its binning, or null. `lock` holds its row until the transaction ends, so that saves take turns. */
export async function findOnBench(
  sequelize: Sequelize,
  binningId: string,
  characteristicId: string,
  tx: Transaction | null = null,
  lock = false,
): Promise<OnBench | null> {
  if (lock) {
    // First the lock, then a statement that sees what its holder before committed.
    await rows(
      sequelize,
      'SELECT id FROM binning_characteristics WHERE id = $1 AND binning_id = $2 FOR UPDATE',
      [characteristicId, binningId],
      tx,
    );
  }
  const [characteristic] = await rows<FoundCharacteristic>(
    sequelize,
    `SELECT ${whole} FROM binning_characteristics c JOIN people p ON p.id = c.changed_by WHERE c.id = $1 AND c.binning_id = $2`,
    [characteristicId, binningId],
    tx,
  );
  const binning = characteristic && (await findBinning(sequelize, binningId, tx));
  return binning ? { binning, characteristic } : null;
}

/** Several characteristics of a binning, locked in one order for all, so that two bulk changes cannot wait for each other. */
export async function lockCharacteristics(
  sequelize: Sequelize,
  binningId: string,
  ids: readonly string[],
  tx: Transaction,
): Promise<FoundCharacteristic[]> {
  await rows(
    sequelize,
    'SELECT id FROM binning_characteristics WHERE binning_id = $1 AND id = ANY($2::uuid[]) ORDER BY id FOR UPDATE',
    [binningId, ids],
    tx,
  );
  return findCharacteristics(sequelize, binningId, ids, tx);
}

/** Whole characteristics of a binning by their ids, in its order; those that are not there are left out. */
export function findCharacteristics(
  sequelize: Sequelize,
  binningId: string,
  ids: readonly string[],
  tx: Transaction | null = null,
): Promise<FoundCharacteristic[]> {
  return rows(
    sequelize,
    `SELECT ${whole} FROM binning_characteristics c JOIN people p ON p.id = c.changed_by
      WHERE c.binning_id = $1 AND c.id = ANY($2::uuid[]) ORDER BY c.position`,
    [binningId, ids],
    tx,
  );
}
