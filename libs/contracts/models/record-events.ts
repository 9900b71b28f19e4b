import { z } from 'zod';
import { recordEvent } from '../record/event';
import { ModelFields } from './schema';

const Member = z.strictObject({ personId: z.uuid(), name: z.string() });

export const modelEvents = [
  recordEvent('model.created', 'model', { after: ModelFields, detail: z.strictObject({ inventoryNumber: z.string() }) }),
  recordEvent('model.edited', 'model', { before: ModelFields.partial(), after: ModelFields.partial() }),
  recordEvent('model.member-added', 'model', { after: Member }),
  recordEvent('model.member-removed', 'model', { before: Member }),
] as const;
