import { defineEndpoint } from '../endpoint';
import { FreezeStarted, NewAct, NewVersion, ReviewList, TextsState, Version, VersionList, VersionTexts, ofModel, ofVersion } from './schema';

export const listVersions = defineEndpoint({
  method: 'GET',
  path: '/api/models/:modelId/versions',
  summary: 'Versions of a model, latest first',
  params: ofModel,
  response: VersionList,
});
export const freezeVersion = defineEndpoint({
  method: 'POST',
  path: '/api/models/:modelId/versions',
  summary: 'Freeze the scorecard of a fit as an immutable version (Idempotency-Key); the run that does it',
  params: ofModel,
  body: NewVersion,
  response: FreezeStarted,
  status: 202,
});
export const readVersion = defineEndpoint({ method: 'GET', path: '/api/versions/:versionId', summary: 'One version', params: ofVersion, response: Version });
export const actOnVersion = defineEndpoint({
  method: 'POST',
  path: '/api/versions/:versionId/acts',
  summary: 'Submit, withdraw, start, conclude, accept or return; a gate that blocks says exactly what is missing',
  params: ofVersion,
  body: NewAct,
  response: Version,
});
export const readTexts = defineEndpoint({
  method: 'GET',
  path: '/api/versions/:versionId/texts',
  summary: 'The author’s texts, with their entity tag',
  params: ofVersion,
  response: TextsState,
});
export const saveTexts = defineEndpoint({
  method: 'PUT',
  path: '/api/versions/:versionId/texts',
  summary: 'Change the author’s texts (If-Match); open until the second signature',
  params: ofVersion,
  body: VersionTexts,
  response: TextsState,
});
export const downloadSpecification = defineEndpoint({
  method: 'GET',
  path: '/api/versions/:versionId/specification',
  summary: 'The specification, as it was hashed',
  params: ofVersion,
  response: 'bytes',
});
export const downloadResult = defineEndpoint({
  method: 'GET',
  path: '/api/versions/:versionId/result',
  summary: 'The result, as it was hashed',
  params: ofVersion,
  response: 'bytes',
});
export const listReviews = defineEndpoint({
  method: 'GET',
  path: '/api/reviews',
  summary: 'Versions that are submitted, in validation or wait for a signature, of every model one reads',
  response: ReviewList,
});
