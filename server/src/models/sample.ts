import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import type { DefinitionCounts, DraftContent, SampleDefinitionContent } from '@tallystone/contracts/samples/definition';
import type { ResultCounts } from '@tallystone/contracts/result/types';
import type { DoubtfulLine, ReadingChoices } from '@tallystone/contracts/samples/reading';
import { type CreationOptional, DataTypes, type InferAttributes, type InferCreationAttributes, Model, type Sequelize } from 'sequelize';

/** A file on its way or here as a whole. Sizes are bigint in the database and arrive as texts. */
export class RawFile extends Model<InferAttributes<RawFile>, InferCreationAttributes<RawFile>> {
  declare id: string;
  declare modelId: string;
  declare personId: string;
  declare fileName: string;
  declare size: string;
  declare received: CreationOptional<string>;
  declare sha256: CreationOptional<string | null>;
  declare startedAt: CreationOptional<Date>;
  declare seenAt: CreationOptional<Date>;
  declare completedAt: CreationOptional<Date | null>;
}

/** Where the doubtful lines of a refused reading begin in the raw file, in bytes, and what is wrong with each: nothing of what stands there. */
export interface DoubtfulPlaces {
  readonly encoding: ReadingChoices['encoding'];
  /** Of all of them; the first are listed. */
  readonly count: number;
  readonly lines: readonly (Pick<DoubtfulLine, 'line' | 'record' | 'doubts'> & { readonly at: number })[];
}

export class Sample extends Model<InferAttributes<Sample>, InferCreationAttributes<Sample>> {
  declare id: CreationOptional<string>;
  declare modelId: string;
  declare number: number;
  declare rawFileId: string;
  declare fileName: string;
  declare size: string;
  declare sha256: string;
  declare reading: CreationOptional<ReadingChoices | null>;
  /** The reading whose columns are the sample's; null until one came through. */
  declare readingId: CreationOptional<string | null>;
  declare rows: CreationOptional<number | null>;
  declare columns: CreationOptional<number | null>;
  declare duplicateRows: CreationOptional<number | null>;
  declare problems: CreationOptional<ProblemItem[]>;
  declare doubtful: CreationOptional<DoubtfulPlaces | null>;
  declare receivedAt: CreationOptional<Date>;
  declare receivedBy: string;
}

export class SampleDraft extends Model<InferAttributes<SampleDraft>, InferCreationAttributes<SampleDraft>> {
  declare sampleId: string;
  declare content: DraftContent;
  declare revision: CreationOptional<number>;
  declare savedAt: CreationOptional<Date>;
  declare savedBy: string;
}

/** What is shown of a definition's counts, and the counts as a result states them. */
export interface StoredCounts extends DefinitionCounts {
  readonly result: ResultCounts;
}

export class SampleDefinition extends Model<InferAttributes<SampleDefinition>, InferCreationAttributes<SampleDefinition>> {
  declare id: CreationOptional<string>;
  declare sampleId: string;
  declare modelId: string;
  declare number: number;
  declare content: SampleDefinitionContent;
  declare counts: StoredCounts;
  declare sha256: string;
  declare createdAt: CreationOptional<Date>;
  declare createdBy: string;
}

export function defineSample(sequelize: Sequelize): void {
  RawFile.init(
    {
      id: { type: DataTypes.UUID, primaryKey: true },
      modelId: DataTypes.UUID,
      personId: DataTypes.UUID,
      fileName: DataTypes.TEXT,
      size: DataTypes.BIGINT,
      received: DataTypes.BIGINT,
      sha256: DataTypes.TEXT,
      startedAt: DataTypes.DATE,
      seenAt: DataTypes.DATE,
      completedAt: DataTypes.DATE,
    },
    { sequelize, tableName: 'raw_files' },
  );
  Sample.init(
    {
      id: { type: DataTypes.UUID, primaryKey: true, defaultValue: DataTypes.UUIDV4 },
      modelId: DataTypes.UUID,
      number: DataTypes.INTEGER,
      rawFileId: DataTypes.UUID,
      fileName: DataTypes.TEXT,
      size: DataTypes.BIGINT,
      sha256: DataTypes.TEXT,
      reading: DataTypes.JSONB,
      readingId: DataTypes.UUID,
      rows: DataTypes.INTEGER,
      columns: DataTypes.INTEGER,
      duplicateRows: DataTypes.INTEGER,
      problems: DataTypes.JSONB,
      doubtful: DataTypes.JSONB,
      receivedAt: DataTypes.DATE,
      receivedBy: DataTypes.UUID,
    },
    { sequelize, tableName: 'samples' },
  );
  SampleDraft.init(
    {
      sampleId: { type: DataTypes.UUID, primaryKey: true },
      content: DataTypes.JSONB,
      revision: DataTypes.INTEGER,
      savedAt: DataTypes.DATE,
      savedBy: DataTypes.UUID,
    },
    { sequelize, tableName: 'sample_drafts' },
  );
  SampleDefinition.init(
    {
      id: { type: DataTypes.UUID, primaryKey: true, defaultValue: DataTypes.UUIDV4 },
      sampleId: DataTypes.UUID,
      modelId: DataTypes.UUID,
      number: DataTypes.INTEGER,
      content: DataTypes.JSONB,
      counts: DataTypes.JSONB,
      sha256: DataTypes.TEXT,
      createdAt: DataTypes.DATE,
      createdBy: DataTypes.UUID,
    },
    { sequelize, tableName: 'sample_definitions' },
  );
}
