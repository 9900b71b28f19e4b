import { defineEndpoint } from '../endpoint';
import { Run, RunList, RunParams, RunQuery } from './schema';

export const listRuns = defineEndpoint({
  method: 'GET',
  path: '/api/runs',
  summary: 'Own runs, or those of a model, latest first',
  query: RunQuery,
  response: RunList,
});
export const readRun = defineEndpoint({
  method: 'GET',
  path: '/api/runs/:runId',
  summary: 'One run; what a client without events asks again and again',
  params: RunParams,
  response: Run,
});
export const cancelRun = defineEndpoint({
  method: 'POST',
  path: '/api/runs/:runId/cancel',
  summary: 'Ask a run to stop',
  params: RunParams,
  response: Run,
});

export const streamEvents = defineEndpoint({
  method: 'GET',
  path: '/api/events',
  summary: 'Server-sent events of the own runs; Last-Event-ID replays what was missed',
  response: 'events',
});
