import type { AnswerOf } from '@tallystone/contracts/endpoint';
import { changeRoles, disablePerson, enablePerson, listPeople, readPerson } from '@tallystone/contracts/people/endpoints';
import type { Actor } from '../../models/person';
import { abilitiesOnPerson, canChangeRoles, canChangeState, canManagePeople, canReadPeople } from '../../policies/people';
import * as changes from '../../services/people/change-roles';
import * as people from '../../services/people/list';
import { type Route, defineRoute } from '../http/route';

function present(subject: people.PersonRow, reader: Actor): AnswerOf<typeof readPerson> {
  return {
    ...subject,
    createdAt: subject.createdAt.toISOString(),
    lastSignInAt: subject.lastSignInAt?.toISOString() ?? null,
    abilities: abilitiesOnPerson(reader, subject),
  };
}

export const peopleRoutes: readonly Route[] = [
  defineRoute(listPeople, {
    access: 'signed-in',
    admit: canReadPeople,
    act: async ({ context, person }) => ({
      people: (await people.listPeople(context.sequelize)).map((one) => present(one, person)),
    }),
  }),

  defineRoute(readPerson, {
    access: 'signed-in',
    admit: canReadPeople,
    find: ({ context, params }) => people.findPerson(context.sequelize, params.personId),
    act({ subject, person, tag }) {
      tag(subject.revision);
      return present(subject, person);
    },
  }),

  defineRoute(changeRoles, {
    access: 'signed-in',
    admit: canManagePeople,
    find: ({ context, params, tx }) => people.findPerson(context.sequelize, params.personId, tx),
    authorise: ({ person, subject }) => canChangeRoles(person, subject),
    async act({ context, tx, person, subject, body, match, tag }) {
      match(subject.revision);
      const changed = await changes.changeRoles(context, tx, person, subject, body);
      tag(changed.revision);
      return present(changed, person);
    },
  }),

  defineRoute(disablePerson, {
    access: 'signed-in',
    admit: canManagePeople,
    find: ({ context, params, tx }) => people.findPerson(context.sequelize, params.personId, tx),
    authorise: ({ person, subject }) => canChangeState(person, subject),
    act: async ({ context, tx, person, subject, body }) =>
      present(await changes.changeState(context, tx, person, subject, { state: 'disabled', reason: body.reason }), person),
  }),

  defineRoute(enablePerson, {
    access: 'signed-in',
    admit: canManagePeople,
    find: ({ context, params, tx }) => people.findPerson(context.sequelize, params.personId, tx),
    authorise: ({ person, subject }) => canChangeState(person, subject),
    act: async ({ context, tx, person, subject, body }) =>
      present(await changes.changeState(context, tx, person, subject, { state: 'active', reason: body.reason }), person),
  }),
];
