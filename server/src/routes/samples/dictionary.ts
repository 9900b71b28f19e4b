import * as endpoints from '@tallystone/contracts/samples/endpoints';
import { canReadModel } from '../../policies/models';
import { canDefineSample, canReadSample } from '../../policies/samples';
import { findCovered } from '../../services/out-of-time/cover';
import { findDictionary, labelsOf, presentDictionary, writeDictionary } from '../../services/samples/dictionary/find';
import { dictionaryFile, importDictionary } from '../../services/samples/dictionary/import';
import { findSample } from '../../services/samples/find-sample';
import { sendAttachment } from '../http/attachment';
import { type Route, defineRoute } from '../http/route';

/** 200 columns with long descriptions. */
const largestDictionary = 4 * 1024 * 1024;

/** What the columns of a sample mean: read, written, as a file, and as labels where characteristics are named. */
export function dictionaryRoutes(): Route[] {
  return [
    defineRoute(endpoints.readDictionary, {
      access: 'signed-in',
      find: async ({ context, params }) =>
        findDictionary(context.sequelize, await findSample(context.sequelize, params.modelId, params.sampleId)),
      authorise: ({ person, subject }) => canReadSample(person, subject.sample),
      act({ person, subject, tag }) {
        tag(subject.revision);
        return presentDictionary(subject, person);
      },
    }),
    defineRoute(endpoints.saveDictionary, {
      access: 'signed-in',
      largestBody: largestDictionary,
      find: async ({ context, params, tx }) =>
        findDictionary(context.sequelize, await findSample(context.sequelize, params.modelId, params.sampleId, tx, true), tx),
      authorise: ({ person, subject }) => canDefineSample(person, subject.sample),
      async act({ context, person, subject, body, tx, match, tag }) {
        match(subject.revision);
        const saved = await writeDictionary(context.sequelize, tx, person, subject, body.entries, 'page');
        tag(saved.revision);
        return presentDictionary(saved, person);
      },
    }),
    defineRoute(endpoints.exportDictionary, {
      access: 'signed-in',
      streams: true,
      find: async ({ context, params }) =>
        findDictionary(context.sequelize, await findSample(context.sequelize, params.modelId, params.sampleId)),
      authorise: ({ person, subject }) => canReadSample(person, subject.sample),
      async act({ context, subject, response }) {
        sendAttachment(response, { name: 'dictionary.csv', type: 'text/csv; charset=utf-8' }, await dictionaryFile(context, subject));
        return undefined;
      },
    }),
    defineRoute(endpoints.importDictionary, {
      access: 'signed-in',
      largestBody: largestDictionary,
      find: async ({ context, params, tx }) =>
        findDictionary(context.sequelize, await findSample(context.sequelize, params.modelId, params.sampleId, tx, true), tx),
      authorise: ({ person, subject }) => canDefineSample(person, subject.sample),
      async act({ context, person, subject, body, tx, match, tag }) {
        match(subject.revision);
        const saved = await importDictionary(context, tx, person, subject, body.text);
        tag(saved.revision);
        return presentDictionary(saved, person);
      },
    }),
    defineRoute(endpoints.readColumnLabels, {
      access: 'signed-in',
      find: ({ context, params }) => findCovered(context.sequelize, params.definitionId),
      authorise: ({ person, subject }) => canReadModel(person, subject.model),
      act: ({ context, subject }) => labelsOf(context.sequelize, subject.id),
    }),
  ];
}
