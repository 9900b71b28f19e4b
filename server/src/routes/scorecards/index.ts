import { readScorecard as readEndpoint, saveScorecard as saveEndpoint, scoreApplicant as scoreEndpoint } from '@tallystone/contracts/scorecards/endpoints';
import { canEditScorecard, canReadScorecard } from '../../policies/scorecards';
import { findFit } from '../../services/fits/find-fit';
import { loadScorecard } from '../../services/scorecards/load-scorecard';
import { readScorecard } from '../../services/scorecards/read-scorecard';
import { saveScorecard } from '../../services/scorecards/save-scorecard';
import { scoreApplicant } from '../../services/scorecards/score-applicant';
import { type Route, defineRoute } from '../http/route';

export const scorecardRoutes: readonly Route[] = [
  defineRoute(readEndpoint, {
    access: 'signed-in',
    find: ({ context, params, tx }) => findFit(context.sequelize, params.fitId, tx),
    authorise: ({ person, subject }) => canReadScorecard(person, subject),
    act: async ({ context, person, subject, tag }) => {
      const scorecard = await readScorecard(context.sequelize, subject, person);
      tag(scorecard.revision);
      return scorecard;
    },
  }),
  defineRoute(saveEndpoint, {
    access: 'signed-in',
    // The fit's row is held, so that two saves come one after the other.
    find: ({ context, params, tx }) => findFit(context.sequelize, params.fitId, tx, true),
    authorise: ({ person, subject }) => canEditScorecard(person, subject),
    act: async ({ context, tx, person, subject, body, match, tag }) => {
      const loaded = await loadScorecard(context.sequelize, subject, tx);
      match(loaded.revision);
      const revision = await saveScorecard(tx, subject, person, loaded, body);
      tag(revision);
      return readScorecard(context.sequelize, subject, person, { ...loaded, settings: body, specification: { ...loaded.specification, ...body }, scoring: { ...loaded.scoring, ...body }, revision });
    },
  }),
  defineRoute(scoreEndpoint, {
    access: 'signed-in',
    find: ({ context, params, tx }) => findFit(context.sequelize, params.fitId, tx),
    authorise: ({ person, subject }) => canReadScorecard(person, subject),
    act: ({ context, subject, body }) => scoreApplicant(context.sequelize, subject, body),
  }),
];
