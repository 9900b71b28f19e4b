import { defineEndpoint } from '../endpoint';
import {
  MemberCandidates,
  MemberParams,
  Model,
  ModelEdit,
  ModelList,
  ModelParams,
  ModelQuery,
  ModelWork,
  NewMember,
  NewModel,
} from './schema';

export const listModels = defineEndpoint({
  method: 'GET',
  path: '/api/models',
  summary: 'The inventory: models one may see',
  query: ModelQuery,
  response: ModelList,
});
export const createModel = defineEndpoint({
  method: 'POST',
  path: '/api/models',
  summary: 'Enter a model in the inventory; whoever enters it is its first member',
  body: NewModel,
  response: Model,
  status: 201,
});
export const readModel = defineEndpoint({
  method: 'GET',
  path: '/api/models/:modelId',
  summary: 'One model, with the entity tag that an edit needs',
  params: ModelParams,
  response: Model,
});
export const editModel = defineEndpoint({
  method: 'PATCH',
  path: '/api/models/:modelId',
  summary: 'Change what is written about a model (If-Match)',
  params: ModelParams,
  body: ModelEdit,
  response: Model,
});
export const listMemberCandidates = defineEndpoint({
  method: 'GET',
  path: '/api/models/:modelId/member-candidates',
  summary: 'Modellers who are not members yet',
  params: ModelParams,
  response: MemberCandidates,
});
export const addMember = defineEndpoint({
  method: 'POST',
  path: '/api/models/:modelId/members',
  summary: 'Let a modeller work on this model',
  params: ModelParams,
  body: NewMember,
  response: Model,
  status: 201,
});
export const removeMember = defineEndpoint({
  method: 'DELETE',
  path: '/api/models/:modelId/members/:personId',
  summary: 'End a modeller’s work on this model',
  params: MemberParams,
  response: Model,
});
export const readModelWork = defineEndpoint({
  method: 'GET',
  path: '/api/models/:modelId/work',
  summary: 'The work’s rule: how far the work on this model has come',
  params: ModelParams,
  response: ModelWork,
});
