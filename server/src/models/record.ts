import type { Role } from '@tallystone/contracts/people/schema';
import { DataTypes, type InferAttributes, type InferCreationAttributes, Model, type Sequelize } from 'sequelize';

/** One link of the chain. The application may read and append rows, nothing else. */
export class RecordRow extends Model<InferAttributes<RecordRow>, InferCreationAttributes<RecordRow>> {
  /** bigint: arrives as text. */
  declare sequence: string | number;
  declare at: Date;
  declare actorId: string | null;
  declare actorName: string;
  declare actorRoles: Role[];
  declare action: string;
  declare entity: string;
  declare entityId: string | null;
  declare modelId: string | null;
  declare before: unknown;
  declare after: unknown;
  declare detail: unknown;
  declare reason: string | null;
  declare previousHash: string;
  declare hash: string;
}

export function defineRecord(sequelize: Sequelize): void {
  RecordRow.init(
    {
      sequence: { type: DataTypes.BIGINT, primaryKey: true },
      at: DataTypes.DATE(3),
      actorId: DataTypes.UUID,
      actorName: DataTypes.TEXT,
      actorRoles: DataTypes.ARRAY(DataTypes.TEXT),
      action: DataTypes.TEXT,
      entity: DataTypes.TEXT,
      entityId: DataTypes.TEXT,
      modelId: DataTypes.UUID,
      before: DataTypes.JSONB,
      after: DataTypes.JSONB,
      detail: DataTypes.JSONB,
      reason: DataTypes.TEXT,
      previousHash: DataTypes.TEXT,
      hash: DataTypes.TEXT,
    },
    { sequelize, tableName: 'record' },
  );
}
