import { openOutOfTime, readOutOfTimeCover } from '@tallystone/contracts/out-of-time/endpoints';
import { canOpenOutOfTime, canReadOutOfTime } from '../../policies/out-of-time';
import { findCovered, openOutOfTime as open, readCover } from '../../services/out-of-time/cover';
import { type Route, defineRoute } from '../http/route';

export const outOfTimeRoutes: readonly Route[] = [
  defineRoute(readOutOfTimeCover, {
    access: 'signed-in',
    find: ({ context, params }) => findCovered(context.sequelize, params.definitionId),
    authorise: ({ person, subject }) => canReadOutOfTime(person, subject),
    act: ({ context, person, subject }) => readCover(context.sequelize, person, subject),
  }),
  defineRoute(openOutOfTime, {
    access: 'signed-in',
    find: ({ context, params, tx }) => findCovered(context.sequelize, params.definitionId, tx),
    authorise: ({ person, subject }) => canOpenOutOfTime(person, subject),
    act: async ({ context, person, subject, body, tx }) => {
      await open(context.sequelize, tx, person, subject, body.reason);
      return readCover(context.sequelize, person, subject, tx);
    },
  }),
];
