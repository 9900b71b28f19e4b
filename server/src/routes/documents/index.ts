import { downloadDocument, listDocuments, listVersionDocuments, makeDocument } from '@tallystone/contracts/documents/endpoints';
import { inTransaction } from '../../database/transaction';
import { canListModels, canReadModel } from '../../policies/models';
import { canMakeDocument, canReadVersion } from '../../policies/versions';
import { findDocument, findDocuments, takeDocument } from '../../services/documents/find-document';
import { startDocument } from '../../services/documents/store';
import { findVersion } from '../../services/versions/find-version';
import { sendAttachment } from '../http/attachment';
import { type Route, defineRoute } from '../http/route';

export const documentRoutes: readonly Route[] = [
  defineRoute(listDocuments, {
    access: 'signed-in',
    admit: (person) => canListModels(person),
    act: async ({ context, person }) => ({
      documents: (await findDocuments(context.sequelize)).filter(({ model }) => canReadModel(person, model).allowed).map(({ summary }) => summary),
      abilities: ['download' as const],
    }),
  }),
  defineRoute(listVersionDocuments, {
    access: 'signed-in',
    find: ({ context, params, tx }) => findVersion(context.sequelize, params.versionId, tx),
    authorise: ({ person, subject }) => canReadVersion(person, subject),
    act: async ({ context, person, subject }) => ({
      documents: (await findDocuments(context.sequelize, subject.id)).map(({ summary }) => summary),
      abilities: canMakeDocument(person, subject).allowed ? ['make' as const, 'download' as const] : ['download' as const],
    }),
  }),
  defineRoute(makeDocument, {
    access: 'signed-in',
    idempotent: true,
    find: ({ context, params, tx }) => findVersion(context.sequelize, params.versionId, tx),
    authorise: ({ person, subject }) => canMakeDocument(person, subject),
    act: async ({ context, tx, person, subject, requestId }) => ({ runId: await startDocument(context, tx, { version: subject, person, requestId }) }),
  }),
  defineRoute(downloadDocument, {
    access: 'signed-in',
    streams: true,
    find: ({ context, params }) => findDocument(context.sequelize, params.documentId),
    authorise: ({ person, subject }) => canReadModel(person, subject.model),
    act: async ({ context, person, subject, response }) => {
      const bytes = await inTransaction(context.sequelize, (tx) => takeDocument(tx, subject, person));
      sendAttachment(response, { name: subject.summary.fileName, type: 'application/pdf' }, bytes);
    },
  }),
];
