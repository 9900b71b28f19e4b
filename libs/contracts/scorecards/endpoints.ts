import { defineEndpoint } from '../endpoint';
import { Applicant, Scorecard, ScorecardSettings, ScoredApplicant, ofFit } from './schema';

export const readScorecard = defineEndpoint({
  method: 'GET',
  path: '/api/fits/:fitId/scorecard',
  summary: 'The scorecard of a fit at its chosen penalty, with the entity tag that a change needs',
  params: ofFit,
  response: Scorecard,
});
export const saveScorecard = defineEndpoint({
  method: 'PUT',
  path: '/api/fits/:fitId/scorecard',
  summary: 'Scaling, bands, reason texts and cut-off (If-Match)',
  params: ofFit,
  body: ScorecardSettings,
  response: Scorecard,
});
export const scoreApplicant = defineEndpoint({
  method: 'POST',
  path: '/api/fits/:fitId/scorecard/applicants',
  summary: 'Score one applicant; nothing of it is kept',
  params: ofFit,
  body: Applicant,
  response: ScoredApplicant,
});
