import type { ChoiceRule, FitPath, FitSettings, PenaltyMetrics } from '@tallystone/contracts/fits/schema';
import { type CreationOptional, DataTypes, type InferAttributes, type InferCreationAttributes, Model, type Sequelize } from 'sequelize';

/** One penalty path: settings and the whole specification as they were when it was started. */
export class Fit extends Model<InferAttributes<Fit>, InferCreationAttributes<Fit>> {
  declare id: string;
  declare modelId: string;
  declare number: number;
  declare name: string;
  declare binningId: string;
  declare definitionId: string;
  declare binningRevisions: Record<string, number>;
  declare settings: FitSettings;
  declare specification: string;
  declare specificationSha256: string;
  declare characteristics: number;
  /** The fit on accepted applicants alone beside one with inference. */
  declare acceptsOnlyId: CreationOptional<string | null>;
  declare runId: CreationOptional<string | null>;
  declare revision: CreationOptional<number>;
  declare createdAt: CreationOptional<Date>;
  declare createdBy: string;
}

/** What is kept of a path beside the metrics by partition. */
export type StoredPath = Omit<FitPath, 'development' | 'holdOut' | 'outOfTime' | 'outOfTimeState'>;

export class FittedPath extends Model<InferAttributes<FittedPath>, InferCreationAttributes<FittedPath>> {
  declare fitId: string;
  declare runId: string;
  declare attempt: number;
  declare path: StoredPath;
  declare development: (PenaltyMetrics | null)[];
  declare holdOut: (PenaltyMetrics | null)[];
  declare outOfTime: (PenaltyMetrics | null)[] | null;
  declare finishedAt: CreationOptional<Date>;
}

/** A penalty taken; the latest of a fit counts. */
export class PenaltyChoice extends Model<InferAttributes<PenaltyChoice>, InferCreationAttributes<PenaltyChoice>> {
  declare id: CreationOptional<string>;
  declare fitId: string;
  declare place: number;
  declare lambda: number;
  declare kept: number;
  declare rule: ChoiceRule;
  declare reason: string;
  declare chosenAt: CreationOptional<Date>;
  declare chosenBy: string;
}

export function defineFit(sequelize: Sequelize): void {
  Fit.init(
    {
      id: { type: DataTypes.UUID, primaryKey: true },
      modelId: DataTypes.UUID,
      number: DataTypes.INTEGER,
      name: DataTypes.TEXT,
      binningId: DataTypes.UUID,
      definitionId: DataTypes.UUID,
      binningRevisions: DataTypes.JSONB,
      settings: DataTypes.JSONB,
      specification: DataTypes.TEXT,
      specificationSha256: { type: DataTypes.TEXT, field: 'specification_sha256' },
      characteristics: DataTypes.INTEGER,
      acceptsOnlyId: DataTypes.UUID,
      runId: DataTypes.UUID,
      revision: DataTypes.INTEGER,
      createdAt: DataTypes.DATE,
      createdBy: DataTypes.UUID,
    },
    { sequelize, tableName: 'fits' },
  );
  FittedPath.init(
    {
      fitId: { type: DataTypes.UUID, primaryKey: true },
      runId: DataTypes.UUID,
      attempt: DataTypes.INTEGER,
      path: DataTypes.JSONB,
      development: DataTypes.JSONB,
      holdOut: DataTypes.JSONB,
      outOfTime: DataTypes.JSONB,
      finishedAt: DataTypes.DATE,
    },
    { sequelize, tableName: 'fit_paths' },
  );
  PenaltyChoice.init(
    {
      id: { type: DataTypes.UUID, primaryKey: true, defaultValue: DataTypes.UUIDV4 },
      fitId: DataTypes.UUID,
      place: DataTypes.INTEGER,
      lambda: DataTypes.DOUBLE,
      kept: DataTypes.INTEGER,
      rule: DataTypes.TEXT,
      reason: DataTypes.TEXT,
      chosenAt: DataTypes.DATE,
      chosenBy: DataTypes.UUID,
    },
    { sequelize, tableName: 'fit_choices' },
  );
}
