import { defineEndpoint } from '../endpoint';
import { NewOpening, OutOfTimeCover, ofDefinition } from './schema';

export const readOutOfTimeCover = defineEndpoint({
  method: 'GET',
  path: '/api/sample-definitions/:definitionId/out-of-time',
  summary: 'Whether the out-of-time figures of a sample definition have been opened, by whom and why',
  params: ofDefinition,
  response: OutOfTimeCover,
});

export const openOutOfTime = defineEndpoint({
  method: 'POST',
  path: '/api/sample-definitions/:definitionId/out-of-time',
  summary: 'Open the out-of-time figures, with the reason, which is recorded',
  params: ofDefinition,
  body: NewOpening,
  response: OutOfTimeCover,
  status: 201,
});
