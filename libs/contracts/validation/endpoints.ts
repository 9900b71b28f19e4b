import { defineEndpoint } from '../endpoint';
import { EvidenceList, NewReplication, NewStability, RunStarted, ValidationWork, ofVersion } from './schema';

export const readValidation = defineEndpoint({
  method: 'GET',
  path: '/api/versions/:versionId/validation',
  summary: 'Replications, stability studies and performance of a version',
  params: ofVersion,
  response: ValidationWork,
});
export const replicateVersion = defineEndpoint({
  method: 'POST',
  path: '/api/versions/:versionId/replications',
  summary: 'Replicate from the stored raw file in a new process (Idempotency-Key)',
  params: ofVersion,
  body: NewReplication,
  response: RunStarted,
  status: 202,
});
export const studyStability = defineEndpoint({
  method: 'POST',
  path: '/api/versions/:versionId/stability',
  summary: 'Refit over bootstrap resamples of development (Idempotency-Key)',
  params: ofVersion,
  body: NewStability,
  response: RunStarted,
  status: 202,
});
export const listEvidence = defineEndpoint({
  method: 'GET',
  path: '/api/versions/:versionId/evidence',
  summary: 'The evidence of a version, numbered',
  params: ofVersion,
  response: EvidenceList,
});
