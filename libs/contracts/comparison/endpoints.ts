import { z } from 'zod';
import { defineEndpoint } from '../endpoint';
import { Comparison, ComparisonQuery } from './schema';

export const compareFits = defineEndpoint({
  method: 'GET',
  path: '/api/models/:modelId/comparison',
  summary: 'Fits side by side on the same rows',
  params: z.strictObject({ modelId: z.uuid() }),
  query: ComparisonQuery,
  response: Comparison,
});
