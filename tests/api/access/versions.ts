import { type AccessRow, developsModel, everyRole, findsNothing, readsModel } from './access';

const version = '/api/versions/:versionId';

export const versionRows: readonly AccessRow[] = [
  readsModel('GET /api/models/:modelId/versions'),
  developsModel('POST /api/models/:modelId/versions'),
  { route: 'GET /api/reviews', own: everyRole('yes') },
  findsNothing(`GET ${version}`),
  findsNothing(`POST ${version}/acts`),
  findsNothing(`GET ${version}/texts`),
  findsNothing(`PUT ${version}/texts`),
  findsNothing(`GET ${version}/specification`),
  findsNothing(`GET ${version}/result`),
  findsNothing(`GET ${version}/validation`),
  findsNothing(`POST ${version}/replications`),
  findsNothing(`POST ${version}/stability`),
  findsNothing(`GET ${version}/evidence`),
];
