import { z } from 'zod';
import { defineEndpoint } from '../endpoint';

const Health = z.object({ status: z.enum(['ok', 'starting', 'stopping', 'unavailable']) }).meta({ id: 'Health' });

export const live = defineEndpoint({ method: 'GET', path: '/health/live', summary: 'The process answers', response: Health });
export const ready = defineEndpoint({
  method: 'GET',
  path: '/health/ready',
  summary: 'The process and its database can serve (503 otherwise)',
  response: Health,
});
export const openApi = defineEndpoint({
  method: 'GET',
  path: '/api/openapi.json',
  summary: 'This description of the API',
  response: z.record(z.string(), z.unknown()),
});
