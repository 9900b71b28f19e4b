import { defineEndpoint } from '../endpoint';
import { Fit, FitBasis, FitList, FitPath, NewChoice, NewFit, ofDefinition, ofFit, ofModel } from './schema';

export const listFits = defineEndpoint({
  method: 'GET',
  path: '/api/models/:modelId/fits',
  summary: 'Fits of a model, latest first',
  params: ofModel,
  response: FitList,
});

export const startFit = defineEndpoint({
  method: 'POST',
  path: '/api/models/:modelId/fits',
  summary: 'Fit a penalty path with cross-validation (Idempotency-Key); the fit and its run',
  params: ofModel,
  body: NewFit,
  response: Fit,
  status: 201,
});

export const readFit = defineEndpoint({
  method: 'GET',
  path: '/api/fits/:fitId',
  summary: 'One fit, with the entity tag that a choice needs',
  params: ofFit,
  response: Fit,
});

export const readFitPath = defineEndpoint({
  method: 'GET',
  path: '/api/fits/:fitId/path',
  summary: 'The path of a fit, evaluated at every penalty; out-of-time only once opened',
  params: ofFit,
  response: FitPath,
});

export const choosePenalty = defineEndpoint({
  method: 'PUT',
  path: '/api/fits/:fitId/choice',
  summary: 'Take one penalty, by a rule or by hand with a reason (If-Match)',
  params: ofFit,
  body: NewChoice,
  response: Fit,
});

export const readFitBasis = defineEndpoint({
  method: 'GET',
  path: '/api/sample-definitions/:definitionId/fit-basis',
  summary: 'What a fit on this definition can draw on: weight, group key, declined applicants',
  params: ofDefinition,
  response: FitBasis,
});
