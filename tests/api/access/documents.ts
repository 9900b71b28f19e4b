import { type AccessRow, everyRole, findsNothing } from './access';

export const documentRows: readonly AccessRow[] = [
  { route: 'GET /api/documents', own: everyRole('yes') },
  findsNothing('GET /api/versions/:versionId/documents'),
  findsNothing('POST /api/versions/:versionId/documents'),
  findsNothing('GET /api/documents/:documentId/file'),
];
