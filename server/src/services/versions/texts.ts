import type { TextsState as TextsStateSchema, VersionTextKey, VersionTexts } from '@tallystone/contracts/versions/schema';
import type { Sequelize, Transaction } from 'sequelize';
import type { z } from 'zod';
import { rows } from '../../database/sql';
import type { Actor } from '../../models/person';
import { VersionTextsRow } from '../../models/version';
import { canWriteTexts } from '../../policies/versions';
import { appendRecord } from '../record/append';
import type { FoundVersion } from './find-version';

type TextsState = z.output<typeof TextsStateSchema>;

export async function readTexts(sequelize: Sequelize, version: FoundVersion, person: Actor, tx: Transaction | null = null): Promise<TextsState> {
  const [row] = await rows<{ texts: VersionTexts; revision: number; by: string; at: Date }>(
    sequelize,
    `SELECT t.texts, t.revision, p.name AS by, t.changed_at AS at FROM version_texts t JOIN people p ON p.id = t.changed_by WHERE t.version_id = $1 ${tx ? 'FOR UPDATE OF t' : ''}`,
    [version.id],
    tx,
  );
  return {
    texts: row.texts,
    revision: row.revision,
    changedBy: row.by,
    changedAt: row.at.toISOString(),
    abilities: canWriteTexts(person, version).allowed ? ['edit'] : [],
  };
}

/** Replaces the texts; the caller has held If-Match against the revision it read under lock. Which texts changed is recorded, not their words. */
export async function saveTexts(tx: Transaction, version: FoundVersion, person: Actor, before: TextsState, texts: VersionTexts): Promise<void> {
  const changed = [...new Set([...Object.keys(before.texts), ...Object.keys(texts)])].filter(
    (key) => (before.texts[key as VersionTextKey] ?? '') !== (texts[key as VersionTextKey] ?? ''),
  ) as VersionTextKey[];
  if (changed.length === 0) return;
  await VersionTextsRow.update(
    { texts, revision: before.revision + 1, changedAt: new Date(), changedBy: person.id },
    { where: { versionId: version.id }, transaction: tx },
  );
  await appendRecord(tx, {
    actor: person,
    action: 'version.texts-changed',
    entity: 'version',
    entityId: version.id,
    modelId: version.modelId,
    detail: { version: version.number, texts: changed },
  });
}
