import { type AccessRow, everyRole, readsModel } from './access';

export const documentRows: readonly AccessRow[] = [
  { route: 'GET /api/documents', own: everyRole('yes') },
  readsModel('GET /api/versions/:versionId/documents'),
  readsModel('POST /api/versions/:versionId/documents'),
  readsModel('GET /api/documents/:documentId/file'),
];
