import type { ScorecardSettings } from '@tallystone/contracts/scorecards/schema';
import { type CreationOptional, DataTypes, type InferAttributes, type InferCreationAttributes, Model, type Sequelize } from 'sequelize';

/** How a fit's chosen penalty is turned into points. */
export class ScorecardRow extends Model<InferAttributes<ScorecardRow>, InferCreationAttributes<ScorecardRow>> {
  declare fitId: string;
  declare settings: ScorecardSettings;
  declare revision: CreationOptional<number>;
  declare changedAt: CreationOptional<Date>;
  declare changedBy: string;
}

export function defineScorecard(sequelize: Sequelize): void {
  ScorecardRow.init(
    {
      fitId: { type: DataTypes.UUID, primaryKey: true },
      settings: DataTypes.JSONB,
      revision: DataTypes.INTEGER,
      changedAt: DataTypes.DATE,
      changedBy: DataTypes.UUID,
    },
    { sequelize, tableName: 'scorecards' },
  );
}
