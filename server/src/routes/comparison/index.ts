import { compareFits } from '@tallystone/contracts/comparison/endpoints';
import { canListFits } from '../../policies/fits';
import { compare } from '../../services/comparison/compare';
import { findModel } from '../../services/models/find-model';
import { type Route, defineRoute } from '../http/route';

export const comparisonRoutes: readonly Route[] = [
  defineRoute(compareFits, {
    access: 'signed-in',
    find: ({ context, params, tx }) => findModel(context.sequelize, params.modelId, tx),
    authorise: ({ person, subject }) => canListFits(person, subject),
    act: ({ context, subject, query }) => compare(context.sequelize, subject.id, query.fits),
  }),
];
