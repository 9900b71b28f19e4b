import { countColumnMonths, reclassFine, splitColumn } from '../classing/class-column';
import { correlateCodes, inflate } from '../classing/correlate';
import { balanceColumn } from './balance-column';
import { buildScorecard } from './build-scorecard';
import { classStored } from './class-stored';
import { codeSegment } from './code-segment';
import { compareFits } from './compare-fits';
import { fitPenaltyPath } from './fit-path';
import { freezeVersion } from './freeze-version';
import { hashPassword, verifyPassword } from './passwords';
import { hideStored } from './hide-column';
import { prepareSample } from './prepare-sample';
import { profileStored } from './profile-stored';
import { qualityColumn } from './quality-column';
import { resampleVersion } from './study-stability';

/**
 * Every task that can run in a thread, by name. A task is a pure function (payload, control) => result; it knows no database and no clock.
 * Another entity adds an import and a line. The pool takes only the types from here, so that the web server does not load the numbers.
 */
export const tasks = {
  'binning.class': classStored,
  'binning.correlate': correlateCodes,
  'binning.inflate': inflate,
  'binning.months': countColumnMonths,
  'binning.reclass': reclassFine,
  'binning.split': splitColumn,
  'fit.compare': compareFits,
  'fit.path': fitPenaltyPath,
  'password.hash': hashPassword,
  'password.verify': verifyPassword,
  'sample.balance': balanceColumn,
  'sample.code': codeSegment,
  'sample.hide': hideStored,
  'sample.prepare': prepareSample,
  'sample.profile': profileStored,
  'sample.quality': qualityColumn,
  'scorecard.build': buildScorecard,
  'version.freeze': freezeVersion,
  'version.resample': resampleVersion,
} as const;

export type Tasks = typeof tasks;
export type TaskName = keyof Tasks;
export type TaskPayload<Name extends TaskName> = Parameters<Tasks[Name]>[0];
export type TaskResult<Name extends TaskName> = Awaited<ReturnType<Tasks[Name]>>;
