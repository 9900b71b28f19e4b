import type { VersionTextKey } from '@tallystone/contracts/versions/schema';

/** Where each of the author's texts stands in the document. */
export const textPlaces: Record<VersionTextKey, { section: number; topic: string }> = {
  recommendation: { section: 1, topic: 'Recommendation' },
  monitoringPlan: { section: 1, topic: 'Monitoring plan' },
  limitations: { section: 2, topic: 'Limitations' },
  exclusionsRationale: { section: 4, topic: 'Rationale' },
  outcomeJustification: { section: 5, topic: 'Justification' },
  sourcesSuitability: { section: 6, topic: 'Suitability of sources' },
  penaltyReason: { section: 9, topic: 'Why this penalty' },
  businessSense: { section: 10, topic: 'Business sense of each characteristic' },
  signExceptions: { section: 10, topic: 'Reasons for sign exceptions' },
  performanceInterpretation: { section: 11, topic: 'Interpretation' },
  changeReasons: { section: 18, topic: 'Reasons for changes' },
};
