import { type AccessRow, developsModel, everyRole, readsModel } from './access';

const binning = '/api/binnings/:binningId';

export const binningRows: readonly AccessRow[] = [
  readsModel('GET /api/models/:modelId/binnings'),
  developsModel('POST /api/models/:modelId/binnings'),
  readsModel(`GET ${binning}`),
  readsModel(`GET ${binning}/characteristics`),
  developsModel(`POST ${binning}/reclassings`),
  developsModel(`POST ${binning}/reclassing-runs`),
  developsModel(`POST ${binning}/inclusions`),
  readsModel(`GET ${binning}/characteristics/:characteristicId`),
  developsModel(`PUT ${binning}/characteristics/:characteristicId`),
  developsModel(`POST ${binning}/characteristics/:characteristicId/fine-edges`),
  readsModel(`GET ${binning}/characteristics/:characteristicId/months`),
  readsModel(`GET ${binning}/characteristics/:characteristicId/edits`),
  readsModel(`GET ${binning}/correlations`),
  developsModel(`POST ${binning}/correlations`),
  readsModel(`GET ${binning}/edits`),
  readsModel('GET /api/sample-definitions/:definitionId/out-of-time'),
  developsModel('POST /api/sample-definitions/:definitionId/out-of-time'),
  readsModel('GET /api/sample-definitions/:definitionId/protected-columns'),
  {
    route: 'POST /api/sample-definitions/:definitionId/protected-columns',
    own: { modeller: 403, validator: 403, compliance: 'yes', admin: 404, auditor: 403 },
    another: { modeller: 404, validator: 403, compliance: 'yes', admin: 404, auditor: 403 },
    nonexistent: everyRole(404),
  },
];

export const fitRows: readonly AccessRow[] = [
  readsModel('GET /api/models/:modelId/fits'),
  developsModel('POST /api/models/:modelId/fits'),
  {
    ...readsModel('GET /api/models/:modelId/comparison'),
    query: ({ fitId, secondFitId }) => `fits=${fitId},${secondFitId}`,
  },
  readsModel('GET /api/sample-definitions/:definitionId/fit-basis'),
  readsModel('GET /api/fits/:fitId'),
  readsModel('GET /api/fits/:fitId/path'),
  developsModel('PUT /api/fits/:fitId/choice'),
  readsModel('GET /api/fits/:fitId/scorecard'),
  developsModel('PUT /api/fits/:fitId/scorecard'),
  readsModel('POST /api/fits/:fitId/scorecard/applicants'),
];
