import { defineEndpoint } from '../endpoint';
import { ofDefinition } from '../out-of-time/schema';
import { NewPermissionAct, ProtectedColumns } from './schema';

export const readProtectedColumns = defineEndpoint({
  method: 'GET',
  path: '/api/sample-definitions/:definitionId/protected-columns',
  summary: 'Protected columns of a confirmed definition: what is barred, who permitted what with which citation',
  params: ofDefinition,
  response: ProtectedColumns,
});

export const actOnProtectedColumn = defineEndpoint({
  method: 'POST',
  path: '/api/sample-definitions/:definitionId/protected-columns',
  summary: 'Compliance permits a protected characteristic with a citation, or withdraws that before a version is frozen with it',
  params: ofDefinition,
  body: NewPermissionAct,
  response: ProtectedColumns,
  status: 201,
});
