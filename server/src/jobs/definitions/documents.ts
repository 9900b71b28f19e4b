import { DocumentResult } from '@tallystone/contracts/documents/schema';
import { z } from 'zod';
import { defineJob } from './job';

export const makeDocumentJob = defineJob({
  kind: 'document.make',
  queue: 'long',
  payload: z.strictObject({ versionId: z.uuid() }),
  result: DocumentResult,
});
