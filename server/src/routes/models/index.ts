import * as endpoints from '@tallystone/contracts/models/endpoints';
import { canCreateModel, canEditModel, canListModels, canManageMembers, canReadModel, canSeeModel } from '../../policies/models';
import { findModel } from '../../services/models/find-model';
import { listModels } from '../../services/models/list-models';
import { listCandidates, presentModel } from '../../services/models/present-model';
import { modelWork } from '../../services/models/work';
import { addMember, createModel, editModel, removeMember } from '../../services/models/write-model';
import { type Route, defineRoute } from '../http/route';

export function modelRoutes(): Route[] {
  return [
    defineRoute(endpoints.listModels, {
      access: 'signed-in',
      admit: canListModels,
      act: ({ context, person, query }) => listModels(context.sequelize, person, query),
    }),
    defineRoute(endpoints.createModel, {
      access: 'signed-in',
      admit: canCreateModel,
      idempotent: true,
      async act({ context, person, body, tx, tag }) {
        const model = await createModel(tx, person, body);
        tag(model.revision);
        return presentModel(context.sequelize, model, person, tx);
      },
    }),
    defineRoute(endpoints.readModel, {
      access: 'signed-in',
      find: ({ context, params }) => findModel(context.sequelize, params.modelId),
      authorise: ({ person, subject }) => canSeeModel(person, subject),
      act({ context, person, subject, tag }) {
        tag(subject.revision);
        return presentModel(context.sequelize, subject, person);
      },
    }),
    defineRoute(endpoints.editModel, {
      access: 'signed-in',
      find: ({ context, params, tx }) => findModel(context.sequelize, params.modelId, tx, true),
      authorise: ({ person, subject }) => canEditModel(person, subject),
      async act({ context, person, subject, body, tx, match, tag }) {
        match(subject.revision);
        const model = await editModel(tx, person, subject, body);
        tag(model.revision);
        return presentModel(context.sequelize, model, person, tx);
      },
    }),
    defineRoute(endpoints.listMemberCandidates, {
      access: 'signed-in',
      find: ({ context, params }) => findModel(context.sequelize, params.modelId),
      authorise: ({ person, subject }) => canManageMembers(person, subject),
      act: ({ context, subject }) => listCandidates(context.sequelize, subject),
    }),
    defineRoute(endpoints.addMember, {
      access: 'signed-in',
      find: ({ context, params, tx }) => findModel(context.sequelize, params.modelId, tx, true),
      authorise: ({ person, subject }) => canManageMembers(person, subject),
      act: async ({ context, person, subject, body, tx }) =>
        presentModel(context.sequelize, await addMember(tx, person, subject, body.personId), person, tx),
    }),
    defineRoute(endpoints.removeMember, {
      access: 'signed-in',
      find: ({ context, params, tx }) => findModel(context.sequelize, params.modelId, tx, true),
      authorise: ({ person, subject }) => canManageMembers(person, subject),
      act: async ({ context, person, subject, params, tx }) =>
        presentModel(context.sequelize, await removeMember(tx, person, subject, params.personId), person, tx),
    }),
    defineRoute(endpoints.readModelWork, {
      access: 'signed-in',
      find: ({ context, params }) => findModel(context.sequelize, params.modelId),
      authorise: ({ person, subject }) => canReadModel(person, subject),
      act: ({ context, subject }) => modelWork(context.sequelize, subject.id),
    }),
  ];
}
