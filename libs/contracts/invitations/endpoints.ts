import { defineEndpoint } from '../endpoint';
import {
  Accepted,
  AcceptInvitation,
  Invitation,
  InvitationList,
  InvitationParams,
  InvitationPreview,
  Invite,
  LookUpInvitation,
} from './schema';

export const listInvitations = defineEndpoint({
  method: 'GET',
  path: '/api/invitations',
  summary: 'Invitations, latest first',
  response: InvitationList,
});

export const invite = defineEndpoint({
  method: 'POST',
  path: '/api/invitations',
  summary: 'Invite a person; the link goes out by mail',
  body: Invite,
  response: Invitation,
  status: 201,
});

export const withdrawInvitation = defineEndpoint({
  method: 'DELETE',
  path: '/api/invitations/:invitationId',
  summary: 'Withdraw an open invitation',
  params: InvitationParams,
  response: Invitation,
});

export const lookUpInvitation = defineEndpoint({
  method: 'POST',
  path: '/api/invitations/look-up',
  summary: 'Whom an invitation link is for',
  body: LookUpInvitation,
  response: InvitationPreview,
});

export const acceptInvitation = defineEndpoint({
  method: 'POST',
  path: '/api/invitations/accept',
  summary: 'Set a password and open the account an invitation is for',
  body: AcceptInvitation,
  response: Accepted,
  status: 201,
});
