import type { MaterialityTier } from '@tallystone/contracts/models/schema';
import { type CreationOptional, DataTypes, type InferAttributes, type InferCreationAttributes, Model, type Sequelize } from 'sequelize';

/** The thing that is governed. Its state is that of its leading version and is not kept twice. */
export class GovernedModel extends Model<InferAttributes<GovernedModel>, InferCreationAttributes<GovernedModel>> {
  declare id: CreationOptional<string>;
  declare inventoryNumber: CreationOptional<string>;
  declare name: string;
  declare purpose: string;
  declare product: string;
  declare population: string;
  declare jurisdiction: string;
  declare owner: string;
  declare materialityTier: MaterialityTier;
  declare intendedUse: string;
  declare prohibitedUse: string;
  declare revision: CreationOptional<number>;
  declare createdAt: CreationOptional<Date>;
  declare createdBy: string;
  declare updatedAt: CreationOptional<Date>;
}

export function defineModel(sequelize: Sequelize): void {
  GovernedModel.init(
    {
      id: { type: DataTypes.UUID, primaryKey: true, defaultValue: DataTypes.UUIDV4 },
      inventoryNumber: DataTypes.TEXT,
      name: DataTypes.TEXT,
      purpose: DataTypes.TEXT,
      product: DataTypes.TEXT,
      population: DataTypes.TEXT,
      jurisdiction: DataTypes.TEXT,
      owner: DataTypes.TEXT,
      materialityTier: DataTypes.SMALLINT,
      intendedUse: DataTypes.TEXT,
      prohibitedUse: DataTypes.TEXT,
      revision: DataTypes.INTEGER,
      createdAt: DataTypes.DATE,
      createdBy: DataTypes.UUID,
      updatedAt: DataTypes.DATE,
    },
    { sequelize, tableName: 'models' },
  );
}
