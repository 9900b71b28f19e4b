import { defineEndpoint } from '../endpoint';
import { Run } from '../runs/schema';
import { RecordHead, RecordPage, RecordQuery } from './schema';

export const listRecord = defineEndpoint({
  method: 'GET',
  path: '/api/record',
  summary: 'The record of actions, latest first',
  query: RecordQuery,
  response: RecordPage,
});
export const readRecordHead = defineEndpoint({
  method: 'GET',
  path: '/api/record/head',
  summary: 'The last link of the chain',
  response: RecordHead,
});

export const verifyRecord = defineEndpoint({
  method: 'POST',
  path: '/api/record/verifications',
  summary: 'Verify the whole chain as a run (Idempotency-Key)',
  response: Run,
  status: 202,
});
