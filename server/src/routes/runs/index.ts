import { cancelRun, listRuns, readRun, streamEvents } from '@tallystone/contracts/runs/endpoints';
import { canCancelRun, canReadRun } from '../../policies/runs';
import * as cancelling from '../../services/runs/cancel';
import * as runs from '../../services/runs/find';
import { type Route, defineRoute } from '../http/route';
import { streamTo } from './event-stream';
import { presentRun } from './present';

export const runRoutes: readonly Route[] = [
  defineRoute(listRuns, {
    access: 'signed-in',
    async act({ context, person, query }) {
      const found = await runs.listRuns(context.sequelize, person.id, {
        modelId: query.modelId,
        active: query.active === 'true',
      });
      return { runs: found.filter((run) => canReadRun(person, run).allowed).map((run) => presentRun(run, person)) };
    },
  }),

  defineRoute(readRun, {
    access: 'signed-in',
    find: ({ context, params, person }) => runs.findRun(context.sequelize, params.runId, person.id),
    authorise: ({ person, subject }) => canReadRun(person, subject),
    act: ({ person, subject }) => presentRun(subject, person),
  }),

  defineRoute(cancelRun, {
    access: 'signed-in',
    find: ({ context, params, person, tx }) => runs.findRun(context.sequelize, params.runId, person.id, tx),
    authorise: ({ person, subject }) => canCancelRun(person, subject),
    async act({ context, tx, person, subject }) {
      await cancelling.cancelRun(context, tx, person, subject);
      return presentRun(await runs.describeRun(context.sequelize, subject.id, person.id, tx), person);
    },
  }),

  defineRoute(streamEvents, {
    access: 'signed-in',
    streams: true,
    act: ({ context, person, request, response }) => streamTo(context, person, request, response),
  }),
];
