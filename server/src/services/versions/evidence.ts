import type { EvidenceKind, EvidenceSummary } from '@tallystone/contracts/validation/schema';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';
import { EvidenceRow } from '../../models/version';
import { canonical } from '../specifications/build-specification';
import { holdVersion } from './find-version';

export interface NewEvidence {
  readonly versionId: string;
  readonly kind: EvidenceKind;
  readonly title: string;
  readonly content: unknown;
  readonly runId: string | null;
  readonly personId: string;
}

/** Adds evidence under the next number of its version. Its hash is over the RFC 8785 canonical JSON of its content. */
export async function addEvidence(sequelize: Sequelize, tx: Transaction, evidence: NewEvidence): Promise<EvidenceRow> {
  await holdVersion(sequelize, tx, evidence.versionId);
  const [{ next }] = await rows<{ next: number }>(
    sequelize,
    'SELECT coalesce(max(number), 0) + 1 AS next FROM evidence WHERE version_id = $1',
    [evidence.versionId],
    tx,
  );
  const { text, sha256 } = canonical(evidence.content);
  return EvidenceRow.create({ ...evidence, content: text, sha256, number: next }, { transaction: tx });
}

/** The evidence of a version in order, without its content. */
export async function listEvidence(sequelize: Sequelize, versionId: string): Promise<EvidenceSummary[]> {
  const all = await rows<Omit<EvidenceSummary, 'at'> & { at: Date }>(
    sequelize,
    `SELECT e.id, e.number, e.kind, e.title, e.sha256, e.run_id AS "runId", p.name AS by, e.at
       FROM evidence e JOIN people p ON p.id = e.person_id WHERE e.version_id = $1 ORDER BY e.number`,
    [versionId],
  );
  return all.map((row) => ({ ...row, at: row.at.toISOString() }));
}

export interface FoundEvidence {
  readonly id: string;
  readonly number: number;
  readonly kind: EvidenceKind;
  readonly title: string;
  readonly content: unknown;
  readonly sha256: string;
  readonly by: string;
  readonly byId: string;
  readonly at: string;
}

/** The evidence of a version with its content, optionally of some kinds alone. */
export async function readEvidence(sequelize: Sequelize, versionId: string, kinds: readonly EvidenceKind[] | null = null, tx: Transaction | null = null): Promise<FoundEvidence[]> {
  const all = await rows<Omit<FoundEvidence, 'at' | 'content'> & { at: Date; content: string }>(
    sequelize,
    `SELECT e.id, e.number, e.kind, e.title, e.content, e.sha256, p.name AS by, e.person_id AS "byId", e.at
       FROM evidence e JOIN people p ON p.id = e.person_id
      WHERE e.version_id = $1 AND ($2::text[] IS NULL OR e.kind = ANY($2::text[])) ORDER BY e.number`,
    [versionId, kinds],
    tx,
  );
  return all.map((row) => ({ ...row, content: JSON.parse(row.content) as unknown, at: row.at.toISOString() }));
}
