import { defineEndpoint } from '../endpoint';
import { ChangeRoles, ChangeState, Person, PersonList, PersonParams } from './schema';

export const listPeople = defineEndpoint({
  method: 'GET',
  path: '/api/people',
  summary: 'Everyone with an account',
  response: PersonList,
});

export const readPerson = defineEndpoint({
  method: 'GET',
  path: '/api/people/:personId',
  summary: 'One person, with the entity tag that a change needs',
  params: PersonParams,
  response: Person,
});

export const changeRoles = defineEndpoint({
  method: 'PUT',
  path: '/api/people/:personId/roles',
  summary: 'Give and take roles (If-Match); ends the sessions of that person',
  params: PersonParams,
  body: ChangeRoles,
  response: Person,
});

export const disablePerson = defineEndpoint({
  method: 'POST',
  path: '/api/people/:personId/disable',
  summary: 'Bar a person from signing in; ends their sessions',
  params: PersonParams,
  body: ChangeState,
  response: Person,
});

export const enablePerson = defineEndpoint({
  method: 'POST',
  path: '/api/people/:personId/enable',
  summary: 'Let a disabled person sign in again',
  params: PersonParams,
  body: ChangeState,
  response: Person,
});
