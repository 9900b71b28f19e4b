import type { AnswerOf } from '@tallystone/contracts/endpoint';
import {
  acceptInvitation,
  invite,
  listInvitations,
  lookUpInvitation,
  withdrawInvitation,
} from '@tallystone/contracts/invitations/endpoints';
import { canInvite } from '../../policies/people';
import * as accepting from '../../services/invitations/accept';
import * as inviting from '../../services/invitations/invite';
import { type Route, defineRoute } from '../http/route';

function present(row: inviting.InvitationRow): AnswerOf<typeof invite> {
  return { ...row, createdAt: row.createdAt.toISOString(), expiresAt: row.expiresAt.toISOString() };
}

export const invitationRoutes: readonly Route[] = [
  defineRoute(listInvitations, {
    access: 'signed-in',
    admit: canInvite,
    act: async ({ context }) => ({ invitations: (await inviting.listInvitations(context)).map(present) }),
  }),

  defineRoute(invite, {
    access: 'signed-in',
    admit: canInvite,
    idempotent: true,
    act: async ({ context, tx, person, body }) => present(await inviting.invite(context, tx, person, body)),
  }),

  defineRoute(withdrawInvitation, {
    access: 'signed-in',
    admit: canInvite,
    find: ({ context, params, tx }) => inviting.findInvitation(context, params.invitationId, tx),
    act: async ({ context, tx, person, subject }) => present(await inviting.withdrawInvitation(context, tx, person, subject)),
  }),

  defineRoute(lookUpInvitation, {
    access: 'anyone',
    ownTransactions: true,
    async act({ context, body }) {
      const { name, email, expiresAt } = await accepting.lookUpInvitation(context, body.token);
      return { name, email, expiresAt: expiresAt.toISOString() };
    },
  }),

  defineRoute(acceptInvitation, {
    access: 'anyone',
    ownTransactions: true,
    act: ({ context, body }) => accepting.acceptInvitation(context, body),
  }),
];
