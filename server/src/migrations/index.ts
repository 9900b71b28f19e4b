import { people } from './0001-people';
import { sessions } from './0002-sessions';
import { record } from './0003-record';
import { runParts } from './0402-run-parts';
import { runs } from './0004-runs';
import { queue } from './0005-queue';
import { mail } from './0006-mail';
import { models } from './0100-models';
import { samples } from './0101-samples';
import { sampleBalances } from './0120-sample-balances';
import { acceptsOnly } from './0121-accepts-only';
import { qualityReports } from './0130-quality-reports';
import { dictionaries } from './0131-dictionaries';
import { erasures } from './0132-erasures';
import { permissions } from './0133-permissions';
import { doubtfulLines } from './0134-doubtful-lines';
import { draftComparisons } from './0135-draft-comparisons';
import { outOfTime } from './0200-out-of-time';
import { binnings } from './0201-binnings';
import { correlations } from './0202-correlations';
import { carriedEdits } from './0203-carried-edits';
import { binningMonths } from './0210-binning-months';
import { notHere } from './0211-not-here';
import { inclusionDecided } from './0212-inclusion-decided';
import { fits } from './0300-fits';
import { scorecards } from './0400-scorecards';
import { versions } from './0401-versions';
import type { Migration } from './migration';

/**
 * Every migration in order. A static list, because a glob finds nothing in the bundle. Numbers leave room by entity: 00xx the base,
 * 01xx models and samples, 02xx binnings, 03xx fits, 04xx scorecards and versions, 05xx documents; the order of this list decides.
 */
export const migrations: readonly Migration[] = [people, sessions, record, runs, queue, mail, models, samples, outOfTime, binnings, correlations, carriedEdits, binningMonths, fits, scorecards, versions, runParts, sampleBalances, acceptsOnly, qualityReports, dictionaries, erasures, permissions, notHere, doubtfulLines, draftComparisons, inclusionDecided];
