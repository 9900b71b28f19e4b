import * as endpoints from '@tallystone/contracts/samples/endpoints';
import { compareDraftJob } from '../../jobs/definitions/samples';
import { canDefineSample, canReadSample } from '../../policies/samples';
import { notFound } from '../../problems/problem';
import { describeRun } from '../../services/runs/find';
import { readBalance } from '../../services/samples/balance';
import { readDraftBalance } from '../../services/samples/compare-draft';
import { confirmDraft } from '../../services/samples/confirm-draft';
import { listDefinitions, readDefinition } from '../../services/samples/definitions';
import { checkDraft, findDraft, presentDraft, saveDraft } from '../../services/samples/draft';
import { startOnDraft } from '../../services/samples/draft-run';
import { findSample } from '../../services/samples/find-sample';
import { type Route, defineRoute } from '../http/route';
import { presentRun } from '../runs/present';

/** 200 columns with their special codes, and lists of values. */
const largestDraft = 4 * 1024 * 1024;

/** What a sample means: the draft under edit and the definitions confirmed from it. */
export function definitionRoutes(): Route[] {
  return [
    defineRoute(endpoints.readDraft, {
      access: 'signed-in',
      find: async ({ context, params }) =>
        findDraft(context, await findSample(context.sequelize, params.modelId, params.sampleId)),
      authorise: ({ person, subject }) => canReadSample(person, subject.sample),
      act({ context, subject, tag }) {
        tag(subject.revision);
        return presentDraft(context, subject);
      },
    }),
    defineRoute(endpoints.saveDraft, {
      access: 'signed-in',
      largestBody: largestDraft,
      find: async ({ context, params, tx }) =>
        findDraft(context, await findSample(context.sequelize, params.modelId, params.sampleId, tx), tx, true),
      authorise: ({ person, subject }) => canDefineSample(person, subject.sample),
      async act({ context, person, subject, body, tx, match, tag }) {
        match(subject.revision);
        const saved = await saveDraft(context, tx, person, subject, body);
        tag(saved.revision);
        return presentDraft(context, saved, tx);
      },
    }),
    defineRoute(endpoints.checkDraft, {
      access: 'signed-in',
      ownTransactions: true,
      find: async ({ context, params, tx }) =>
        findDraft(context, await findSample(context.sequelize, params.modelId, params.sampleId, tx), tx),
      authorise: ({ person, subject }) => canDefineSample(person, subject.sample),
      act: ({ context, subject }) => checkDraft(context, subject),
    }),
    defineRoute(endpoints.readDraftBalance, {
      access: 'signed-in',
      find: async ({ context, params }) =>
        findDraft(context, await findSample(context.sequelize, params.modelId, params.sampleId)),
      authorise: ({ person, subject }) => canReadSample(person, subject.sample),
      act: ({ context, subject }) => readDraftBalance(context, subject),
    }),
    defineRoute(endpoints.compareDraft, {
      access: 'signed-in',
      idempotent: true,
      find: async ({ context, params, tx }) =>
        findDraft(context, await findSample(context.sequelize, params.modelId, params.sampleId, tx, true), tx, true),
      authorise: ({ person, subject }) => canDefineSample(person, subject.sample),
      async act({ context, person, subject, body, tx, requestId }) {
        const run = await startOnDraft(context, tx, compareDraftJob, {
          person,
          draft: subject,
          revision: body.revision,
          requestId,
        });
        return presentRun(await describeRun(context.sequelize, run.id, person.id, tx), person);
      },
    }),
    defineRoute(endpoints.confirmDraft, {
      access: 'signed-in',
      idempotent: true,
      find: async ({ context, params, tx }) =>
        findDraft(context, await findSample(context.sequelize, params.modelId, params.sampleId, tx, true), tx, true),
      authorise: ({ person, subject }) => canDefineSample(person, subject.sample),
      async act({ context, person, subject, body, tx, requestId }) {
        const run = await confirmDraft(context, tx, person, subject, body.revision, requestId);
        return presentRun(await describeRun(context.sequelize, run.id, person.id, tx), person);
      },
    }),
    defineRoute(endpoints.listDefinitions, {
      access: 'signed-in',
      find: ({ context, params }) => findSample(context.sequelize, params.modelId, params.sampleId),
      authorise: ({ person, subject }) => canReadSample(person, subject),
      act: ({ context, subject }) => listDefinitions(context.sequelize, subject),
    }),
    defineRoute(endpoints.readDefinition, {
      access: 'signed-in',
      find: ({ context, params }) => findSample(context.sequelize, params.modelId, params.sampleId),
      authorise: ({ person, subject }) => canReadSample(person, subject),
      async act({ context, subject, params }) {
        const definition = await readDefinition(context.sequelize, subject, params.definitionId);
        if (!definition) throw notFound();
        return definition;
      },
    }),
    defineRoute(endpoints.readBalance, {
      access: 'signed-in',
      find: ({ context, params }) => findSample(context.sequelize, params.modelId, params.sampleId),
      authorise: ({ person, subject }) => canReadSample(person, subject),
      async act({ context, subject, params }) {
        const balance = await readBalance(context.sequelize, subject, params.definitionId);
        if (!balance) throw notFound();
        return balance;
      },
    }),
  ];
}
