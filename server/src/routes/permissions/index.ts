import { actOnProtectedColumn, readProtectedColumns } from '@tallystone/contracts/permissions/endpoints';
import { canPermitProtected, canReadProtected } from '../../policies/permissions';
import { actOnProtected } from '../../services/permissions/act';
import { findProtecting, readProtected } from '../../services/permissions/protection';
import { type Route, defineRoute } from '../http/route';

export const permissionRoutes: readonly Route[] = [
  defineRoute(readProtectedColumns, {
    access: 'signed-in',
    find: ({ context, params }) => findProtecting(context.sequelize, params.definitionId),
    authorise: ({ person, subject }) => canReadProtected(person, subject),
    act: ({ context, person, subject }) => readProtected(context.sequelize, person, subject),
  }),
  defineRoute(actOnProtectedColumn, {
    access: 'signed-in',
    find: ({ context, params, tx }) => findProtecting(context.sequelize, params.definitionId, tx),
    authorise: ({ person, subject }) => canPermitProtected(person, subject),
    act: async ({ context, person, subject, body, tx }) => {
      await actOnProtected(context.sequelize, tx, person, subject, body);
      return readProtected(context.sequelize, person, subject, tx);
    },
  }),
];
