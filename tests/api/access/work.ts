import { type AccessRow, developsModel, findsNothing, readsModel } from './access';

const binning = '/api/binnings/:binningId';

export const binningRows: readonly AccessRow[] = [
  readsModel('GET /api/models/:modelId/binnings'),
  developsModel('POST /api/models/:modelId/binnings'),
  findsNothing(`GET ${binning}`),
  findsNothing(`GET ${binning}/characteristics`),
  findsNothing(`POST ${binning}/reclassings`),
  findsNothing(`POST ${binning}/inclusions`),
  findsNothing(`GET ${binning}/characteristics/:characteristicId`),
  findsNothing(`PUT ${binning}/characteristics/:characteristicId`),
  findsNothing(`POST ${binning}/characteristics/:characteristicId/fine-edges`),
  findsNothing(`GET ${binning}/characteristics/:characteristicId/edits`),
  findsNothing('GET /api/sample-definitions/:definitionId/out-of-time'),
  findsNothing('POST /api/sample-definitions/:definitionId/out-of-time'),
];

export const fitRows: readonly AccessRow[] = [
  readsModel('GET /api/models/:modelId/fits'),
  developsModel('POST /api/models/:modelId/fits'),
  readsModel('GET /api/models/:modelId/comparison'),
  findsNothing('GET /api/fits/:fitId'),
  findsNothing('GET /api/fits/:fitId/path'),
  findsNothing('PUT /api/fits/:fitId/choice'),
  findsNothing('GET /api/fits/:fitId/scorecard'),
  findsNothing('PUT /api/fits/:fitId/scorecard'),
  findsNothing('POST /api/fits/:fitId/scorecard/applicants'),
];
