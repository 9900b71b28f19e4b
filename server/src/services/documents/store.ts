import { createHash, randomUUID } from 'node:crypto';
import type { Transaction } from 'sequelize';
import type { Context } from '../../context';
import type { DocumentInput } from '../../documents/input';
import { rows } from '../../database/sql';
import { makeDocumentJob } from '../../jobs/definitions/documents';
import { startRun } from '../../jobs/start-run';
import type { Actor } from '../../models/person';
import { DocumentRow } from '../../models/version';
import { actorOf } from '../people/actor-of';
import { appendRecord } from '../record/append';
import { type FoundVersion, holdVersion } from '../versions/find-version';

export async function startDocument(context: Context, tx: Transaction, asked: { version: FoundVersion; person: Actor; requestId: string }): Promise<string> {
  const { version, person, requestId } = asked;
  const run = await startRun(context, tx, makeDocumentJob, {
    payload: { versionId: version.id },
    person,
    modelId: version.modelId,
    entity: 'version',
    entityId: version.id,
    singleton: version.id,
    requestId,
  });
  return run.id;
}

export interface MadeDocument {
  readonly input: DocumentInput;
  readonly bytes: Buffer;
  readonly pages: number;
  readonly evidenceSha256: string;
}

/** Keeps the bytes of a document for good, with their SHA-256 in the record. */
export async function storeDocument(
  context: Context,
  tx: Transaction,
  run: { id: string; personId: string },
  version: { id: string; number: number; modelId: string; inventoryNumber: string },
  { input, bytes, pages, evidenceSha256 }: MadeDocument,
): Promise<{ documentId: string; sha256: string }> {
  await holdVersion(context.sequelize, tx, version.id);
  const [{ next }] = await rows<{ next: number }>(context.sequelize, 'SELECT coalesce(max(number), 0) + 1 AS next FROM documents WHERE version_id = $1', [version.id], tx);
  // The edition is printed in the bytes: a document that was made meanwhile would bear the same one.
  if (next !== input.edition) throw new Error(`Edition ${input.edition} was made meanwhile`);
  const documentId = randomUUID();
  const sha256 = createHash('sha256').update(bytes).digest('hex');
  await DocumentRow.create(
    {
      id: documentId,
      versionId: version.id,
      number: next,
      fileName: `${version.inventoryNumber}-version-${version.number}-edition-${next}.pdf`,
      content: bytes,
      size: bytes.length,
      pages,
      sha256,
      evidenceSha256,
      recordHead: `${input.recordHead.sequence} ${input.recordHead.hash}`,
      runId: run.id,
      madeBy: run.personId,
    },
    { transaction: tx },
  );
  await appendRecord(tx, {
    actor: await actorOf(run.personId, tx),
    action: 'document.made',
    entity: 'document',
    entityId: documentId,
    modelId: version.modelId,
    after: { version: version.number, document: next, sha256, evidenceSha256, pages },
  });
  return { documentId, sha256 };
}
