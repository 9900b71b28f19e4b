import type { ModelState } from '@tallystone/contracts/models/schema';
import type { EvidenceKind } from '@tallystone/contracts/validation/schema';
import type { Conclusion, VersionAct, VersionTexts } from '@tallystone/contracts/versions/schema';
import { type CreationOptional, DataTypes, type InferAttributes, type InferCreationAttributes, Model, type Sequelize } from 'sequelize';

/** A frozen scorecard. Rows are added and never changed: the application has no other privilege on this table. */
export class VersionRow extends Model<InferAttributes<VersionRow>, InferCreationAttributes<VersionRow>> {
  declare id: string;
  declare modelId: string;
  declare number: number;
  declare fitId: string;
  declare choiceId: string;
  declare binningId: string;
  declare definitionId: string;
  declare note: string;
  declare specification: string;
  declare specificationSha256: string;
  declare result: string;
  declare resultSha256: string;
  declare dataSha256: string;
  declare scoresSha256: string;
  declare codeVersion: string;
  declare fingerprint: string;
  declare runId: string;
  declare frozenAt: CreationOptional<Date>;
  declare frozenBy: string;
}

export class VersionActRow extends Model<InferAttributes<VersionActRow>, InferCreationAttributes<VersionActRow>> {
  declare id: CreationOptional<string>;
  declare versionId: string;
  declare act: VersionAct;
  declare fromState: ModelState | null;
  declare toState: ModelState;
  declare conclusion: Conclusion | null;
  declare conditions: string[];
  declare statement: string;
  declare role: 'modeller' | 'validator' | 'compliance';
  declare personId: string;
  declare at: CreationOptional<Date>;
}

export class VersionTextsRow extends Model<InferAttributes<VersionTextsRow>, InferCreationAttributes<VersionTextsRow>> {
  declare versionId: string;
  declare texts: VersionTexts;
  declare revision: CreationOptional<number>;
  declare changedAt: CreationOptional<Date>;
  declare changedBy: string;
}

/** What a run found out about a version, kept as canonical JSON with its hash and numbered within the version. */
export class EvidenceRow extends Model<InferAttributes<EvidenceRow>, InferCreationAttributes<EvidenceRow>> {
  declare id: CreationOptional<string>;
  declare versionId: string;
  declare number: number;
  declare kind: EvidenceKind;
  declare title: string;
  declare content: string;
  declare sha256: string;
  declare runId: string | null;
  declare personId: string;
  declare at: CreationOptional<Date>;
}

export class DocumentRow extends Model<InferAttributes<DocumentRow>, InferCreationAttributes<DocumentRow>> {
  declare id: string;
  declare versionId: string;
  declare number: number;
  declare fileName: string;
  declare content: Buffer;
  declare size: number;
  declare pages: number;
  declare sha256: string;
  declare evidenceSha256: string;
  declare recordHead: string;
  declare runId: string;
  declare madeAt: CreationOptional<Date>;
  declare madeBy: string;
}

const sha256 = (field: string) => ({ type: DataTypes.TEXT, field });
const made = { type: DataTypes.UUID, primaryKey: true, defaultValue: DataTypes.UUIDV4 };

export function defineVersion(sequelize: Sequelize): void {
  VersionRow.init(
    {
      id: { type: DataTypes.UUID, primaryKey: true },
      modelId: DataTypes.UUID,
      number: DataTypes.INTEGER,
      fitId: DataTypes.UUID,
      choiceId: DataTypes.UUID,
      binningId: DataTypes.UUID,
      definitionId: DataTypes.UUID,
      note: DataTypes.TEXT,
      specification: DataTypes.TEXT,
      specificationSha256: sha256('specification_sha256'),
      result: DataTypes.TEXT,
      resultSha256: sha256('result_sha256'),
      dataSha256: sha256('data_sha256'),
      scoresSha256: sha256('scores_sha256'),
      codeVersion: DataTypes.TEXT,
      fingerprint: DataTypes.TEXT,
      runId: DataTypes.UUID,
      frozenAt: DataTypes.DATE,
      frozenBy: DataTypes.UUID,
    },
    { sequelize, tableName: 'versions' },
  );
  VersionActRow.init(
    {
      id: made,
      versionId: DataTypes.UUID,
      act: DataTypes.TEXT,
      fromState: DataTypes.TEXT,
      toState: DataTypes.TEXT,
      conclusion: DataTypes.TEXT,
      conditions: DataTypes.JSONB,
      statement: DataTypes.TEXT,
      role: DataTypes.TEXT,
      personId: DataTypes.UUID,
      at: DataTypes.DATE,
    },
    { sequelize, tableName: 'version_acts' },
  );
  VersionTextsRow.init(
    {
      versionId: { type: DataTypes.UUID, primaryKey: true },
      texts: DataTypes.JSONB,
      revision: DataTypes.INTEGER,
      changedAt: DataTypes.DATE,
      changedBy: DataTypes.UUID,
    },
    { sequelize, tableName: 'version_texts' },
  );
  EvidenceRow.init(
    {
      id: made,
      versionId: DataTypes.UUID,
      number: DataTypes.INTEGER,
      kind: DataTypes.TEXT,
      title: DataTypes.TEXT,
      content: DataTypes.TEXT,
      sha256: DataTypes.TEXT,
      runId: DataTypes.UUID,
      personId: DataTypes.UUID,
      at: DataTypes.DATE,
    },
    { sequelize, tableName: 'evidence' },
  );
  DocumentRow.init(
    {
      id: { type: DataTypes.UUID, primaryKey: true },
      versionId: DataTypes.UUID,
      number: DataTypes.INTEGER,
      fileName: DataTypes.TEXT,
      content: DataTypes.BLOB,
      size: DataTypes.INTEGER,
      pages: DataTypes.INTEGER,
      sha256: DataTypes.TEXT,
      evidenceSha256: sha256('evidence_sha256'),
      recordHead: DataTypes.TEXT,
      runId: DataTypes.UUID,
      madeAt: DataTypes.DATE,
      madeBy: DataTypes.UUID,
    },
    { sequelize, tableName: 'documents' },
  );
}
