import { z } from 'zod';

/** A model-governance document, made once and kept as its bytes. */
export const DocumentSummary = z.object({
  id: z.uuid(),
  versionId: z.uuid(),
  modelId: z.uuid(),
  modelName: z.string(),
  versionNumber: z.int(),
  /** 1, 2 … within the version. */
  number: z.int(),
  fileName: z.string(),
  bytes: z.int(),
  pages: z.int(),
  /** Of the bytes; in the record too. */
  sha256: z.string(),
  evidenceSha256: z.string(),
  recordHead: z.string(),
  madeBy: z.string(),
  madeAt: z.string(),
});
export const DocumentList = z.object({ documents: z.array(DocumentSummary), abilities: z.array(z.enum(['make', 'download'])) }).meta({ id: 'DocumentList' });
/** Result of the run "make document" (Run.result). */
export const DocumentResult = z.object({ documentId: z.uuid(), sha256: z.string() });
export const DocumentStarted = z.object({ runId: z.uuid() });
export const ofVersion = z.strictObject({ versionId: z.uuid() });
export const ofDocument = z.strictObject({ documentId: z.uuid() });

export type DocumentSummary = z.infer<typeof DocumentSummary>;
export type DocumentList = z.infer<typeof DocumentList>;
