import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import type { RunState } from '@tallystone/contracts/runs/schema';
import {
  type CreationOptional,
  DataTypes,
  type InferAttributes,
  type InferCreationAttributes,
  Model,
  type Sequelize,
} from 'sequelize';

export class Run extends Model<InferAttributes<Run>, InferCreationAttributes<Run>> {
  declare id: CreationOptional<string>;
  declare kind: string;
  declare queue: string;
  declare payload: unknown;
  declare state: CreationOptional<RunState>;
  declare phase: CreationOptional<string | null>;
  declare share: CreationOptional<number | null>;
  declare attempt: CreationOptional<number>;
  declare mostAttempts: number;
  declare personId: string;
  declare modelId: string | null;
  declare entity: string | null;
  declare entityId: string | null;
  declare singleton: string | null;
  declare jobId: CreationOptional<string | null>;
  declare requestId: string | null;
  declare result: CreationOptional<unknown>;
  declare problem: CreationOptional<ProblemItem | null>;
  declare createdAt: CreationOptional<Date>;
  declare queuedAt: CreationOptional<Date>;
  declare startedAt: CreationOptional<Date | null>;
  declare endedAt: CreationOptional<Date | null>;
}

export function defineRun(sequelize: Sequelize): void {
  Run.init(
    {
      id: { type: DataTypes.UUID, primaryKey: true, defaultValue: DataTypes.UUIDV4 },
      kind: DataTypes.TEXT,
      queue: DataTypes.TEXT,
      payload: DataTypes.JSONB,
      state: DataTypes.TEXT,
      phase: DataTypes.TEXT,
      share: DataTypes.DOUBLE,
      attempt: DataTypes.INTEGER,
      mostAttempts: DataTypes.INTEGER,
      personId: DataTypes.UUID,
      modelId: DataTypes.UUID,
      entity: DataTypes.TEXT,
      entityId: DataTypes.TEXT,
      singleton: DataTypes.TEXT,
      jobId: DataTypes.UUID,
      requestId: DataTypes.TEXT,
      result: DataTypes.JSONB,
      problem: DataTypes.JSONB,
      createdAt: DataTypes.DATE,
      queuedAt: DataTypes.DATE,
      startedAt: DataTypes.DATE,
      endedAt: DataTypes.DATE,
    },
    { sequelize, tableName: 'runs' },
  );
}
