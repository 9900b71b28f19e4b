import * as endpoints from '@tallystone/contracts/samples/endpoints';
import { canAnswerFlag, canReadSample } from '../../policies/samples';
import { conflict } from '../../problems/problem';
import { describeRun } from '../../services/runs/find';
import { findSample } from '../../services/samples/find-sample';
import { answerFlag } from '../../services/samples/quality/answer-flag';
import { readColumnReport, readReport, reportOf } from '../../services/samples/quality/read-report';
import { startReport } from '../../services/samples/quality/start-report';
import { type Route, defineRoute } from '../http/route';
import { presentRun } from '../runs/present';

/** The quality report of a sample: read, made where it is not there yet, its flags answered. */
export function qualityRoutes(): Route[] {
  return [
    defineRoute(endpoints.readQuality, {
      access: 'signed-in',
      find: ({ context, params }) => findSample(context.sequelize, params.modelId, params.sampleId),
      authorise: ({ person, subject }) => canReadSample(person, subject),
      act: ({ context, person, subject }) => readReport(context.sequelize, subject, person),
    }),
    defineRoute(endpoints.readColumnQuality, {
      access: 'signed-in',
      find: ({ context, params }) => findSample(context.sequelize, params.modelId, params.sampleId),
      authorise: ({ person, subject }) => canReadSample(person, subject),
      act: ({ context, subject, query }) => readColumnReport(context.sequelize, subject, query.column),
    }),
    defineRoute(endpoints.makeQuality, {
      access: 'signed-in',
      idempotent: true,
      find: ({ context, params, tx }) => findSample(context.sequelize, params.modelId, params.sampleId, tx, true),
      authorise: ({ person, subject }) => canAnswerFlag(person, subject),
      async act({ context, person, subject, tx, requestId }) {
        const definitionId = subject.latestDefinitionId;
        if (definitionId === null)
          throw conflict('not-defined', 'The report needs a confirmed definition. Confirm what is good and bad first.');
        if (await reportOf(context.sequelize, definitionId, tx))
          throw conflict('made-already', 'The report of this definition is there: it is made once and kept.');
        const run = await startReport(context, tx, { definitionId, modelId: subject.modelId, person, requestId });
        return presentRun(await describeRun(context.sequelize, run.id, person.id, tx), person);
      },
    }),
    defineRoute(endpoints.answerFlag, {
      access: 'signed-in',
      find: ({ context, params, tx }) => findSample(context.sequelize, params.modelId, params.sampleId, tx, true),
      authorise: ({ person, subject }) => canAnswerFlag(person, subject),
      async act({ context, person, subject, body, tx }) {
        await answerFlag(context, tx, person, subject, body);
        return readReport(context.sequelize, subject, person, tx);
      },
    }),
  ];
}
