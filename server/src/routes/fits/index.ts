import { choosePenalty as choosePenaltyEndpoint, listFits, readFit, readFitBasis as readFitBasisEndpoint, readFitPath, startFit as startFitEndpoint } from '@tallystone/contracts/fits/endpoints';
import { canChoosePenalty, canListFits, canReadFit, canStartFit } from '../../policies/fits';
import { choosePenalty } from '../../services/fits/choose-penalty';
import { findFit, findFits } from '../../services/fits/find-fit';
import { presentFit, presentFitSummary } from '../../services/fits/present-fit';
import { readPath } from '../../services/fits/read-path';
import { startFit } from '../../services/fits/start-fit';
import { notFound } from '../../problems/problem';
import { readFitBasis } from '../../services/fits/fit-basis';
import { findModel } from '../../services/models/find-model';
import { findCovered } from '../../services/out-of-time/cover';
import { type Route, defineRoute } from '../http/route';

export const fitRoutes: readonly Route[] = [
  defineRoute(listFits, {
    access: 'signed-in',
    find: ({ context, params, tx }) => findModel(context.sequelize, params.modelId, tx),
    authorise: ({ person, subject }) => canListFits(person, subject),
    act: async ({ context, person, subject, tx }) => ({
      fits: (await findFits(context.sequelize, subject.id, tx)).map(presentFitSummary),
      abilities: canStartFit(person, subject).allowed ? ['start-fit' as const] : [],
    }),
  }),
  defineRoute(startFitEndpoint, {
    access: 'signed-in',
    idempotent: true,
    find: ({ context, params, tx }) => findModel(context.sequelize, params.modelId, tx),
    authorise: ({ person, subject }) => canStartFit(person, subject),
    act: async ({ context, tx, person, subject, body, requestId, tag }) => {
      const fit = await startFit(context, tx, { model: subject, person, binningId: body.binningId, settings: body.settings, requestId });
      tag(fit.revision);
      return presentFit(fit, person);
    },
  }),
  defineRoute(readFit, {
    access: 'signed-in',
    find: ({ context, params, tx }) => findFit(context.sequelize, params.fitId, tx),
    authorise: ({ person, subject }) => canReadFit(person, subject),
    act: ({ person, subject, tag }) => {
      tag(subject.revision);
      return presentFit(subject, person);
    },
  }),
  defineRoute(readFitPath, {
    access: 'signed-in',
    find: ({ context, params, tx }) => findFit(context.sequelize, params.fitId, tx),
    authorise: ({ person, subject }) => canReadFit(person, subject),
    act: ({ context, subject }) => readPath(context.sequelize, subject),
  }),
  defineRoute(readFitBasisEndpoint, {
    access: 'signed-in',
    find: ({ context, params, tx }) => findCovered(context.sequelize, params.definitionId, tx),
    authorise: ({ person, subject }) => canListFits(person, subject.model),
    async act({ context, params }) {
      const basis = await readFitBasis(context.sequelize, params.definitionId);
      if (!basis) throw notFound();
      return basis;
    },
  }),
  defineRoute(choosePenaltyEndpoint, {
    access: 'signed-in',
    find: ({ context, params, tx }) => findFit(context.sequelize, params.fitId, tx, true),
    authorise: ({ person, subject }) => canChoosePenalty(person, subject),
    act: async ({ context, tx, person, subject, body, match, tag }) => {
      match(subject.revision);
      const fit = await choosePenalty(context, tx, subject, person, body);
      tag(fit.revision);
      return presentFit(fit, person);
    },
  }),
];
