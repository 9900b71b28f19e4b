import { type AccessRow, developsModel, everyRole, readsModel } from './access';

const version = '/api/versions/:versionId';

/** The modellers of the model and every validator. */
const replicates = (route: string): AccessRow => ({
  route,
  own: { modeller: 'yes', validator: 'yes', compliance: 403, admin: 404, auditor: 403 },
  another: { modeller: 404, validator: 'yes', compliance: 403, admin: 404, auditor: 403 },
  nonexistent: everyRole(404),
});

export const versionRows: readonly AccessRow[] = [
  readsModel('GET /api/models/:modelId/versions'),
  developsModel('POST /api/models/:modelId/versions'),
  { route: 'GET /api/reviews', own: everyRole('yes') },
  readsModel(`GET ${version}`),
  // Which act is whose depends on the act: tests/api/whole-line.spec.ts. An empty body says no act, and is refused for that.
  readsModel(`POST ${version}/acts`),
  readsModel(`GET ${version}/texts`),
  developsModel(`PUT ${version}/texts`),
  readsModel(`GET ${version}/specification`),
  readsModel(`GET ${version}/result`),
  readsModel(`GET ${version}/validation`),
  replicates(`POST ${version}/replications`),
  replicates(`POST ${version}/stability`),
  readsModel(`GET ${version}/evidence`),
];
