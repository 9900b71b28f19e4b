import { defineEndpoint } from '../endpoint';
import { Correlations, CorrelationRun } from './correlations';
import { CharacteristicMonths } from './months';
import {
  Binning,
  BinningHistory,
  BinningList,
  CharacteristicDetail,
  CharacteristicList,
  EditHistory,
  NewBinning,
  NewFineEdge,
  Reclass,
  ReclassingRun,
  SaveBins,
  SetInclusion,
  ofBinning,
  ofCharacteristic,
  ofModel,
} from './schema';

const binning = '/api/binnings/:binningId' as const;
const characteristic = `${binning}/characteristics/:characteristicId` as const;

export const listBinnings = defineEndpoint({
  method: 'GET',
  path: '/api/models/:modelId/binnings',
  summary: 'Binnings of a model, latest first',
  params: ofModel,
  response: BinningList,
});
export const startBinning = defineEndpoint({
  method: 'POST',
  path: '/api/models/:modelId/binnings',
  summary: 'Class every characteristic of a confirmed sample automatically (Idempotency-Key); the binning and its run',
  params: ofModel,
  body: NewBinning,
  response: Binning,
  status: 201,
});
export const readBinning = defineEndpoint({
  method: 'GET',
  path: binning,
  summary: 'One binning',
  params: ofBinning,
  response: Binning,
});
export const listCharacteristics = defineEndpoint({
  method: 'GET',
  path: `${binning}/characteristics`,
  summary: 'The characteristics of a binning with what their bins say',
  params: ofBinning,
  response: CharacteristicList,
});
export const reclassCharacteristics = defineEndpoint({
  method: 'POST',
  path: `${binning}/reclassings`,
  summary: 'Class characteristics anew under constraints, from their fine classes',
  params: ofBinning,
  body: Reclass,
  response: CharacteristicList,
});
export const startReclassing = defineEndpoint({
  method: 'POST',
  path: `${binning}/reclassing-runs`,
  summary: 'Class any number of characteristics anew under other constraints (Idempotency-Key); the run that does it',
  params: ofBinning,
  body: Reclass,
  response: ReclassingRun,
  status: 202,
});
export const setInclusion = defineEndpoint({
  method: 'POST',
  path: `${binning}/inclusions`,
  summary: 'Leave characteristics out with a reason, or take them in again',
  params: ofBinning,
  body: SetInclusion,
  response: CharacteristicList,
});
export const readCharacteristic = defineEndpoint({
  method: 'GET',
  path: characteristic,
  summary: 'One characteristic with its fine classes and the entity tag that a save needs',
  params: ofCharacteristic,
  response: CharacteristicDetail,
});
export const saveCharacteristic = defineEndpoint({
  method: 'PUT',
  path: characteristic,
  summary: 'Save the bins of a characteristic and the edits that made them (If-Match)',
  params: ofCharacteristic,
  body: SaveBins,
  response: CharacteristicDetail,
});
export const splitFineClass = defineEndpoint({
  method: 'POST',
  path: `${characteristic}/fine-edges`,
  summary: 'Split a fine class at a value, from the stored column, so that a cut can lie there',
  params: ofCharacteristic,
  body: NewFineEdge,
  response: CharacteristicDetail,
});
export const readMonths = defineEndpoint({
  method: 'GET',
  path: `${characteristic}/months`,
  summary:
    'Counts of the fine classes by month of application, for development and hold-out, and out-of-time once it has been opened',
  params: ofCharacteristic,
  response: CharacteristicMonths,
});
export const listEdits = defineEndpoint({
  method: 'GET',
  path: `${characteristic}/edits`,
  summary: 'Every manual edit of a characteristic, undone ones included, latest first',
  params: ofCharacteristic,
  response: EditHistory,
});
export const readCorrelations = defineEndpoint({
  method: 'GET',
  path: `${binning}/correlations`,
  summary: 'Correlations of the included characteristics by WOE, variance inflation and groups that say the same',
  params: ofBinning,
  response: Correlations,
});
export const calculateCorrelations = defineEndpoint({
  method: 'POST',
  path: `${binning}/correlations`,
  summary: 'Calculate the correlations anew for the bins as they are (Idempotency-Key); the run that does it',
  params: ofBinning,
  response: CorrelationRun,
  status: 202,
});
export const listBinningEdits = defineEndpoint({
  method: 'GET',
  path: `${binning}/edits`,
  summary: 'Every manual edit of a binning, undone ones included, latest first, at most 2,000',
  params: ofBinning,
  response: BinningHistory,
});
