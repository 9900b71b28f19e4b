import type { AskedConstraints, Bins, Constraints, Fine, SlotCounts } from '@tallystone/contracts/binnings/bins';
import type { EditKind, EditReason } from '@tallystone/contracts/binnings/edits';
import type { NotHere, Warning, ivReadings, trends } from '@tallystone/contracts/binnings/schema';
import type { BinnedCharacteristic } from '@tallystone/contracts/specification/types';
import {
  type CreationOptional,
  DataTypes,
  type InferAttributes,
  type InferCreationAttributes,
  Model,
  type Sequelize,
} from 'sequelize';

export class Binning extends Model<InferAttributes<Binning>, InferCreationAttributes<Binning>> {
  declare id: CreationOptional<string>;
  declare modelId: string;
  declare definitionId: string;
  declare number: number;
  declare name: string;
  declare constraints: AskedConstraints;
  declare barred: { column: string; reason: string }[];
  declare runId: CreationOptional<string | null>;
  /** The earlier binning whose edits were carried over. */
  declare fromBinningId: CreationOptional<string | null>;
  /** What the earlier binning decided about columns that are not classed here. */
  declare notHere: CreationOptional<NotHere[]>;
  declare readyAt: CreationOptional<Date | null>;
  declare createdAt: CreationOptional<Date>;
  declare createdBy: string;
}

/** What the bins of a characteristic say, kept so that the list does not recalculate them. Without out-of-time figures. */
export interface StoredSummary {
  informationValue: number;
  informationValueLower: number | null;
  informationValueUpper: number | null;
  reading: (typeof ivReadings)[number];
  gini: number;
  missingShare: number;
  bins: number;
  trend: (typeof trends)[number];
  /** CSI of hold-out against development. */
  csiHoldOut: number | null;
  /** Standard deviation of WOE between months of development and hold-out, beyond chance; absent until they have been counted. */
  monthlyDrift?: number | null;
  warnings: Warning[];
}

export class BinningCharacteristic extends Model<
  InferAttributes<BinningCharacteristic>,
  InferCreationAttributes<BinningCharacteristic>
> {
  declare id: CreationOptional<string>;
  declare binningId: string;
  declare position: number;
  declare columnName: string;
  declare kind: 'numeric' | 'categorical';
  declare definition: BinnedCharacteristic;
  declare automatic: Bins;
  declare constraints: Constraints;
  /** `outOfTime` is null here; its counts lie apart, so that nothing that is covered is read by accident. */
  declare fine: Fine;
  declare outOfTime: SlotCounts;
  declare summary: StoredSummary;
  declare outOfTimeWarnings: CreationOptional<Warning[]>;
  /** CSI of out-of-time against development: apart, as it is covered until somebody opens it. */
  declare outOfTimeCsi: CreationOptional<number | null>;
  declare included: CreationOptional<boolean>;
  declare leftOutReason: CreationOptional<string>;
  /** A person decided whether it is included, other than the bins alone would have it. */
  declare inclusionDecided: CreationOptional<boolean>;
  declare revision: CreationOptional<number>;
  declare changedAt: CreationOptional<Date>;
  declare changedBy: string;
}

export class BinningEdit extends Model<InferAttributes<BinningEdit>, InferCreationAttributes<BinningEdit>> {
  declare id: string;
  declare characteristicId: string;
  declare sequence: CreationOptional<string>;
  /** Place among the edits in effect, from 0; null once it is no longer in effect. */
  declare place: number | null;
  declare kind: EditKind;
  declare what: string;
  declare before: Bins;
  declare after: Bins;
  declare reason: EditReason | null;
  /** The edit of an earlier binning that this one repeats, or would have. */
  declare carriedFrom: CreationOptional<string | null>;
  declare notCarried: CreationOptional<string | null>;
  declare madeBy: string;
  declare madeAt: CreationOptional<Date>;
}

export function defineBinning(sequelize: Sequelize): void {
  Binning.init(
    {
      id: { type: DataTypes.UUID, primaryKey: true, defaultValue: DataTypes.UUIDV4 },
      modelId: DataTypes.UUID,
      definitionId: DataTypes.UUID,
      number: DataTypes.INTEGER,
      name: DataTypes.TEXT,
      constraints: DataTypes.JSONB,
      barred: DataTypes.JSONB,
      runId: DataTypes.UUID,
      fromBinningId: DataTypes.UUID,
      notHere: DataTypes.JSONB,
      readyAt: DataTypes.DATE,
      createdAt: DataTypes.DATE,
      createdBy: DataTypes.UUID,
    },
    { sequelize, tableName: 'binnings' },
  );
  BinningCharacteristic.init(
    {
      id: { type: DataTypes.UUID, primaryKey: true, defaultValue: DataTypes.UUIDV4 },
      binningId: DataTypes.UUID,
      position: DataTypes.INTEGER,
      columnName: DataTypes.TEXT,
      kind: DataTypes.TEXT,
      definition: DataTypes.JSONB,
      automatic: DataTypes.JSONB,
      constraints: DataTypes.JSONB,
      fine: DataTypes.JSONB,
      outOfTime: DataTypes.JSONB,
      summary: DataTypes.JSONB,
      outOfTimeWarnings: DataTypes.JSONB,
      outOfTimeCsi: DataTypes.DOUBLE,
      included: DataTypes.BOOLEAN,
      leftOutReason: DataTypes.TEXT,
      inclusionDecided: DataTypes.BOOLEAN,
      revision: DataTypes.INTEGER,
      changedAt: DataTypes.DATE,
      changedBy: DataTypes.UUID,
    },
    { sequelize, tableName: 'binning_characteristics' },
  );
  BinningEdit.init(
    {
      id: { type: DataTypes.UUID, primaryKey: true },
      characteristicId: DataTypes.UUID,
      sequence: DataTypes.BIGINT,
      place: DataTypes.INTEGER,
      kind: DataTypes.TEXT,
      what: DataTypes.TEXT,
      before: DataTypes.JSONB,
      after: DataTypes.JSONB,
      reason: DataTypes.JSONB,
      carriedFrom: DataTypes.UUID,
      notCarried: DataTypes.TEXT,
      madeBy: DataTypes.UUID,
      madeAt: DataTypes.DATE,
    },
    { sequelize, tableName: 'binning_edits' },
  );
}
