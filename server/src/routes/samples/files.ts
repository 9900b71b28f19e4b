import * as endpoints from '@tallystone/contracts/samples/endpoints';
import { canDiscardSample, canListSamples, canReadFile, canReadSample } from '../../policies/samples';
import { findModel } from '../../services/models/find-model';
import { describeRun } from '../../services/runs/find';
import { listColumns } from '../../services/samples/columns-of';
import { confirmReading } from '../../services/samples/confirm-reading';
import { discardSample } from '../../services/samples/discard-sample';
import { doubtfulLinesOf } from '../../services/samples/doubtful-places';
import { findSample } from '../../services/samples/find-sample';
import { listSamples, presentSample } from '../../services/samples/present-sample';
import { previewReading } from '../../services/samples/preview';
import { type Route, defineRoute } from '../http/route';
import { presentRun } from '../runs/present';

/** Samples as files: listed, previewed, read, looked at column by column, discarded. */
export function fileRoutes(): Route[] {
  return [
    defineRoute(endpoints.listSamples, {
      access: 'signed-in',
      find: ({ context, params }) => findModel(context.sequelize, params.modelId),
      authorise: ({ person, subject }) => canListSamples(person, subject),
      act: ({ context, person, subject }) => listSamples(context.sequelize, subject, person),
    }),
    defineRoute(endpoints.readSample, {
      access: 'signed-in',
      find: ({ context, params }) => findSample(context.sequelize, params.modelId, params.sampleId),
      authorise: ({ person, subject }) => canReadSample(person, subject),
      act: ({ person, subject }) => presentSample(subject, person),
    }),
    defineRoute(endpoints.discardSample, {
      access: 'signed-in',
      find: ({ context, params, tx }) => findSample(context.sequelize, params.modelId, params.sampleId, tx, true),
      authorise: ({ person, subject }) => canDiscardSample(person, subject),
      async act({ person, subject, tx }) {
        await discardSample(tx, person, subject);
        return undefined;
      },
    }),
    defineRoute(endpoints.previewReading, {
      access: 'signed-in',
      ownTransactions: true,
      find: ({ context, params, tx }) => findSample(context.sequelize, params.modelId, params.sampleId, tx),
      authorise: ({ person, subject }) => canReadFile(person, subject),
      act: ({ context, subject, body }) => previewReading(context, subject, body),
    }),
    defineRoute(endpoints.confirmReading, {
      access: 'signed-in',
      idempotent: true,
      find: ({ context, params, tx }) => findSample(context.sequelize, params.modelId, params.sampleId, tx, true),
      authorise: ({ person, subject }) => canReadFile(person, subject),
      async act({ context, person, subject, body, tx, requestId }) {
        const run = await confirmReading(context, tx, person, subject, body, requestId);
        return presentRun(await describeRun(context.sequelize, run.id, person.id, tx), person);
      },
    }),
    defineRoute(endpoints.readDoubtfulLines, {
      access: 'signed-in',
      find: ({ context, params }) => findSample(context.sequelize, params.modelId, params.sampleId),
      // Rows as they stand: for those who look into the file before it is read.
      authorise: ({ person, subject }) => canReadFile(person, subject),
      act: ({ context, subject }) => doubtfulLinesOf(context, subject),
    }),
    defineRoute(endpoints.listColumns, {
      access: 'signed-in',
      find: ({ context, params }) => findSample(context.sequelize, params.modelId, params.sampleId),
      authorise: ({ person, subject }) => canReadSample(person, subject),
      act: ({ context, subject }) => listColumns(context.sequelize, subject),
    }),
  ];
}
