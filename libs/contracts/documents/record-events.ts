import { z } from 'zod';
import { recordEvent } from '../record/event';

const Bytes = z.strictObject({ version: z.int(), document: z.int(), sha256: z.string() });

export const documentEvents = [
  recordEvent('document.made', 'document', { after: z.strictObject({ ...Bytes.shape, evidenceSha256: z.string(), pages: z.int() }) }),
  recordEvent('document.downloaded', 'document', { detail: Bytes }),
] as const;
