import { type AccessRow, developsModel, everyRole, findsNothing, only, readsModel } from './access';

const seen = { modeller: 404, validator: 'yes', compliance: 'yes', admin: 'yes', auditor: 'yes' } as const;
const edited = { modeller: 404, validator: 403, compliance: 403, admin: 403, auditor: 403 } as const;
const managed = { ...edited, admin: 'yes' } as const;
const tus = { 'Tus-Resumable': '1.0.0', 'Content-Type': 'application/offset+octet-stream', 'Upload-Offset': '0' };

export const modelRows: readonly AccessRow[] = [
  { route: 'GET /api/models', own: everyRole('yes') },
  { route: 'POST /api/models', own: only(['modeller']) },
  { route: 'GET /api/models/:modelId', own: { ...seen, modeller: 'yes' }, another: seen, nonexistent: everyRole(404) },
  { route: 'PATCH /api/models/:modelId', own: { ...edited, modeller: 'yes' }, another: edited, nonexistent: everyRole(404) },
  {
    route: 'GET /api/models/:modelId/member-candidates',
    own: { ...managed, modeller: 'yes' },
    another: managed,
    nonexistent: everyRole(404),
  },
  {
    route: 'POST /api/models/:modelId/members',
    own: { ...managed, modeller: 'yes' },
    another: managed,
    nonexistent: everyRole(404),
  },
  {
    route: 'DELETE /api/models/:modelId/members/:personId',
    own: { ...managed, modeller: 'yes' },
    another: managed,
    nonexistent: everyRole(404),
    params: { personId: 'personId' },
  },
  readsModel('GET /api/models/:modelId/work'),
];

const ofSample = '/api/models/:modelId/samples/:sampleId';

export const sampleRows: readonly AccessRow[] = [
  developsModel('POST /api/models/:modelId/uploads', { 'Tus-Resumable': '1.0.0' }),
  { ...findsNothing('HEAD /api/models/:modelId/uploads/:uploadId'), headers: tus },
  { ...findsNothing('PATCH /api/models/:modelId/uploads/:uploadId'), headers: tus },
  { ...findsNothing('DELETE /api/models/:modelId/uploads/:uploadId'), headers: tus },
  readsModel('GET /api/models/:modelId/samples'),
  readsModel(`GET ${ofSample}`),
  developsModel(`POST ${ofSample}/preview`),
  developsModel(`POST ${ofSample}/readings`),
  readsModel(`GET ${ofSample}/columns`),
  findsNothing(`GET ${ofSample}/draft`),
  findsNothing(`PUT ${ofSample}/draft`),
  findsNothing(`POST ${ofSample}/draft/check`),
  findsNothing(`POST ${ofSample}/definitions`),
  readsModel(`GET ${ofSample}/definitions`),
  findsNothing(`GET ${ofSample}/definitions/:definitionId`),
  // Last of its kind: whoever may, discards the table's sample.
  developsModel(`DELETE ${ofSample}`),
];
