import { defineEndpoint } from '../endpoint';
import { ChangePassword, OwnSessions, Session, SessionParams, SignIn } from './schema';

export const readSession = defineEndpoint({
  method: 'GET',
  path: '/api/session',
  summary: 'Who is signed in and what they may do; user is null when nobody is',
  response: Session,
});

export const signIn = defineEndpoint({
  method: 'POST',
  path: '/api/session',
  summary: 'Sign in',
  body: SignIn,
  response: Session,
});
export const signOut = defineEndpoint({ method: 'DELETE', path: '/api/session', summary: 'Sign out', response: Session });

export const changePassword = defineEndpoint({
  method: 'PUT',
  path: '/api/session/password',
  summary: 'Change the own password; ends every session of the person but starts this one anew',
  body: ChangePassword,
  response: Session,
});

export const listOwnSessions = defineEndpoint({
  method: 'GET',
  path: '/api/sessions',
  summary: 'Own sessions',
  response: OwnSessions,
});

export const endOwnSession = defineEndpoint({
  method: 'DELETE',
  path: '/api/sessions/:sessionId',
  summary: 'End one of the own sessions',
  params: SessionParams,
  response: 'nothing',
});
