import { freezeVersion, replicateVersion, studyVersionStability } from './versions';
import type { Handler } from '../handler';
import { classBinning, completeBinning, correlateBinning, reclassBinning } from './binnings';
import { makeDocument } from './documents';
import { fitPenaltyPath } from './fits';
import { verifyRecord } from './record';
import { compareDraft, confirmSample, readSample, reportQuality } from './samples';

/** Everything a worker can do. An entity adds its handlers here. */
export const handlers: readonly Handler[] = [
  verifyRecord,
  classBinning,
  correlateBinning,
  completeBinning,
  reclassBinning,
  readSample,
  compareDraft,
  confirmSample,
  reportQuality,
  fitPenaltyPath,
  freezeVersion,
  replicateVersion,
  studyVersionStability,
  makeDocument,
];
