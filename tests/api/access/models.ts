import { type AccessRow, developsModel, everyRole, only, readsModel } from './access';

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

const spare = { params: { sampleId: 'spareSampleId' } };
/** An upload belongs to whoever began it. */
const ownUpload = (method: string, tail = ''): AccessRow => ({
  ...developsModel(`${method} /api/models/:modelId/uploads/:uploadId${tail}`),
  headers: tus,
});

export const sampleRows: readonly AccessRow[] = [
  developsModel('POST /api/models/:modelId/uploads', { 'Tus-Resumable': '1.0.0' }),
  ownUpload('HEAD'),
  ownUpload('GET', '/arrived'),
  ownUpload('PATCH'),
  ownUpload('DELETE'),
  readsModel('GET /api/models/:modelId/samples'),
  readsModel(`GET ${ofSample}`),
  { ...developsModel(`POST ${ofSample}/preview`), ...spare },
  { ...developsModel(`POST ${ofSample}/readings`), ...spare },
  { ...developsModel(`GET ${ofSample}/doubtful-lines`), ...spare },
  readsModel(`GET ${ofSample}/columns`),
  readsModel(`GET ${ofSample}/draft`),
  developsModel(`PUT ${ofSample}/draft`),
  developsModel(`POST ${ofSample}/draft/check`),
  readsModel(`GET ${ofSample}/draft/balance`),
  developsModel(`POST ${ofSample}/draft/balance`),
  developsModel(`POST ${ofSample}/definitions`),
  readsModel(`GET ${ofSample}/definitions`),
  readsModel(`GET ${ofSample}/definitions/:definitionId`),
  readsModel(`GET ${ofSample}/definitions/:definitionId/balance`),
  readsModel(`GET ${ofSample}/quality`),
  { ...readsModel(`GET ${ofSample}/quality/column`), query: () => 'column=age' },
  developsModel(`POST ${ofSample}/quality`),
  developsModel(`POST ${ofSample}/quality/answers`),
  readsModel(`GET ${ofSample}/dictionary`),
  developsModel(`PUT ${ofSample}/dictionary`),
  readsModel(`GET ${ofSample}/dictionary/file`),
  developsModel(`POST ${ofSample}/dictionary/file`),
  readsModel('GET /api/sample-definitions/:definitionId/labels'),
  { route: 'GET /api/models/:modelId/kept-samples', own: { ...seen, modeller: 'yes' }, another: seen, nonexistent: everyRole(404) },
  {
    route: `POST ${ofSample}/erasure`,
    own: { modeller: 403, validator: 403, compliance: 403, admin: 'yes', auditor: 403 },
    another: { modeller: 404, validator: 403, compliance: 403, admin: 'yes', auditor: 403 },
    nonexistent: everyRole(404),
  },
  // Last of its kind: whoever may, discards the sample.
  { ...developsModel(`DELETE ${ofSample}`), ...spare },
];
