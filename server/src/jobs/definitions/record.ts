import { RecordVerification } from '@tallystone/contracts/record/schema';
import { z } from 'zod';
import { defineJob } from './job';

export const verifyRecordJob = defineJob({
  kind: 'record.verify',
  queue: 'long',
  payload: z.strictObject({}),
  result: RecordVerification,
});
