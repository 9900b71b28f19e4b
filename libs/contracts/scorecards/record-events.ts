import { recordEvent } from '../record/event';
import { ScorecardSettings } from './schema';

export const scorecardEvents = [
  recordEvent('scorecard.changed', 'scorecard', { before: ScorecardSettings.nullable(), after: ScorecardSettings }),
] as const;
