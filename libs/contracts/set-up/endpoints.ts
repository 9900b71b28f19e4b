import { defineEndpoint } from '../endpoint';
import { Accepted } from '../invitations/schema';
import { SetUp, SetUpState } from './schema';

export const readSetUp = defineEndpoint({
  method: 'GET',
  path: '/api/set-up',
  summary: 'Whether the first admin is still to be made',
  response: SetUpState,
});

export const setUp = defineEndpoint({
  method: 'POST',
  path: '/api/set-up',
  summary: 'Make the first admin, with the one-time token that the server wrote at its first start',
  body: SetUp,
  response: Accepted,
  status: 201,
});
