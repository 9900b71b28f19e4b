import { defineEndpoint } from '../endpoint';
import { DocumentList, DocumentStarted, ofDocument, ofVersion } from './schema';

export const listDocuments = defineEndpoint({ method: 'GET', path: '/api/documents', summary: 'Documents of every model one reads', response: DocumentList });
export const listVersionDocuments = defineEndpoint({
  method: 'GET',
  path: '/api/versions/:versionId/documents',
  summary: 'Documents of one version, latest first',
  params: ofVersion,
  response: DocumentList,
});
export const makeDocument = defineEndpoint({
  method: 'POST',
  path: '/api/versions/:versionId/documents',
  summary: 'Make the model-governance PDF from the evidence (Idempotency-Key)',
  params: ofVersion,
  response: DocumentStarted,
  status: 202,
});
export const downloadDocument = defineEndpoint({
  method: 'GET',
  path: '/api/documents/:documentId/file',
  summary: 'The bytes of a document, as an attachment; the download is recorded',
  params: ofDocument,
  response: 'bytes',
});
