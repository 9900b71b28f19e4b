import { evidenceFingerprint } from '../../documents/fingerprints';
import { pagesOf, renderDocument } from '../../documents/render-document';
import { gatherDocument } from '../../services/documents/gather';
import { storeDocument } from '../../services/documents/store';
import { findVersion } from '../../services/versions/find-version';
import { makeDocumentJob } from '../definitions/documents';
import { handle } from '../handler';

export const makeDocument = handle(makeDocumentJob, {
  async work({ versionId }, { context, run, signal, progress, finish }) {
    progress('Gathering the evidence', null);
    const version = await findVersion(context.sequelize, versionId);
    if (!version) throw new Error(`There is no version ${versionId}`);
    const input = await gatherDocument(context, versionId, run.personId);
    signal.throwIfAborted();
    progress('Writing the document', null);
    // The date is that of the attempt: the bytes are kept, so it need not be found again.
    const bytes = await renderDocument(input, { fixedDate: new Date() });
    const made = { input, bytes, pages: pagesOf(bytes), evidenceSha256: evidenceFingerprint(input.evidence) };
    await finish((tx) => storeDocument(context, tx, run, version, made));
  },
});
