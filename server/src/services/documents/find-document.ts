import type { DocumentSummary } from '@tallystone/contracts/documents/schema';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';
import { DocumentRow } from '../../models/version';
import type { Actor } from '../../models/person';
import type { ModelMembership } from '../../policies/models';
import { appendRecord } from '../record/append';

export interface FoundDocument {
  readonly summary: DocumentSummary;
  readonly model: ModelMembership;
}

type Row = Omit<DocumentSummary, 'madeAt'> & { readonly madeAt: Date; readonly memberIds: readonly string[] };

const select = `
  SELECT d.id, d.version_id AS "versionId", v.model_id AS "modelId", m.name AS "modelName", v.number AS "versionNumber", d.number,
         d.file_name AS "fileName", d.size AS bytes, d.pages, d.sha256, d.evidence_sha256 AS "evidenceSha256", d.record_head AS "recordHead",
         p.name AS "madeBy", d.made_at AS "madeAt",
         ARRAY(SELECT person_id::text FROM model_members WHERE model_id = v.model_id) AS "memberIds"
    FROM documents d JOIN versions v ON v.id = d.version_id JOIN models m ON m.id = v.model_id JOIN people p ON p.id = d.made_by`;

const found = ({ memberIds, madeAt, ...row }: Row): FoundDocument => ({ summary: { ...row, madeAt: madeAt.toISOString() }, model: { memberIds } });

/** Documents of one version, or of all, the latest first; never their bytes. */
export async function findDocuments(sequelize: Sequelize, versionId: string | null = null): Promise<FoundDocument[]> {
  return (await rows<Row>(sequelize, `${select} WHERE $1::uuid IS NULL OR d.version_id = $1 ORDER BY d.made_at DESC, d.number DESC`, [versionId])).map(found);
}

export async function findDocument(sequelize: Sequelize, documentId: string, tx: Transaction | null = null): Promise<FoundDocument | null> {
  const [row] = await rows<Row>(sequelize, `${select} WHERE d.id = $1`, [documentId], tx);
  return row ? found(row) : null;
}

/** The bytes, with the download on record. */
export async function takeDocument(tx: Transaction, { summary }: FoundDocument, person: Actor): Promise<Buffer> {
  const row = await DocumentRow.findByPk(summary.id, { attributes: ['content'], raw: true, transaction: tx });
  if (!row) throw new Error(`There is no document ${summary.id}`);
  await appendRecord(tx, {
    actor: person,
    action: 'document.downloaded',
    entity: 'document',
    entityId: summary.id,
    modelId: summary.modelId,
    detail: { version: summary.versionNumber, document: summary.number, sha256: summary.sha256 },
  });
  return row.content;
}
