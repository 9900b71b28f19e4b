import { defineEndpoint } from '../endpoint';
import { ofDefinition } from '../out-of-time/schema';
import { Run } from '../runs/schema';
import { CompareDraft, DraftBalance, PartitionBalance } from './balance';
import { ColumnList } from './columns';
import { ConfirmDraft, ConfirmReading, Definition, DefinitionList, Draft, DraftCheck, DraftContent } from './definition';
import { ColumnLabels, Dictionary, DictionaryContent, DictionaryFile } from './dictionary';
import { KeptSamples, NewErasure } from './erasure';
import { ColumnQualityDetail, NewFlagAnswer, QualityColumnQuery, QualityState } from './quality';
import { DoubtfulLines, Preview, PreviewRequest } from './reading';
import { ArrivedPart, DefinitionParams, Sample, SampleList, SampleListParams, SampleParams, UploadParams } from './schema';

const ofModel = '/api/models/:modelId' as const;
const ofSample = `${ofModel}/samples/:sampleId` as const;

export const listSamples = defineEndpoint({
  method: 'GET',
  path: `${ofModel}/samples`,
  summary: 'Samples of a model and own unfinished uploads',
  params: SampleListParams,
  response: SampleList,
});

/** Resumable upload: the tus protocol 1.0.0 (creation, termination). The answer to the last PATCH carries `Sample-Id`. */
export const beginUpload = defineEndpoint({
  method: 'POST',
  path: `${ofModel}/uploads`,
  summary: 'Begin to send a file (tus creation; Upload-Metadata: filename)',
  params: SampleListParams,
  body: 'bytes',
  response: 'nothing',
  status: 201,
});
export const askUpload = defineEndpoint({
  method: 'HEAD',
  path: `${ofModel}/uploads/:uploadId`,
  summary: 'How much of a file has arrived (tus)',
  params: UploadParams,
  response: 'nothing',
  status: 200,
});
export const fingerprintUpload = defineEndpoint({
  method: 'GET',
  path: `${ofModel}/uploads/:uploadId/arrived`,
  summary: 'SHA-256 of what has arrived of a file, to be compared before going on',
  params: UploadParams,
  response: ArrivedPart,
});
export const sendUpload = defineEndpoint({
  method: 'PATCH',
  path: `${ofModel}/uploads/:uploadId`,
  summary: 'Send on from the offset (tus); Upload-Sha256 states the SHA-256 of the whole file',
  params: UploadParams,
  body: 'bytes',
  response: 'nothing',
});
export const dropUpload = defineEndpoint({
  method: 'DELETE',
  path: `${ofModel}/uploads/:uploadId`,
  summary: 'Drop an unfinished upload (tus termination)',
  params: UploadParams,
  response: 'nothing',
});

export const readSample = defineEndpoint({
  method: 'GET',
  path: ofSample,
  summary: 'One sample',
  params: SampleParams,
  response: Sample,
});
export const discardSample = defineEndpoint({
  method: 'DELETE',
  path: ofSample,
  summary: 'Discard a sample on which nothing rests yet: file, columns and draft',
  params: SampleParams,
  response: 'nothing',
});
export const previewReading = defineEndpoint({
  method: 'POST',
  path: `${ofSample}/preview`,
  summary: 'The first rows and every doubtful line under given or judged reading choices',
  params: SampleParams,
  body: PreviewRequest,
  response: Preview,
});
export const confirmReading = defineEndpoint({
  method: 'POST',
  path: `${ofSample}/readings`,
  summary: 'Read the file with these choices, as a run (Idempotency-Key)',
  params: SampleParams,
  body: ConfirmReading,
  response: Run,
  status: 202,
});
export const readDoubtfulLines = defineEndpoint({
  method: 'GET',
  path: `${ofSample}/doubtful-lines`,
  summary: 'The doubtful lines of the whole file, as a reading that was refused found them',
  params: SampleParams,
  response: DoubtfulLines,
});
export const listColumns = defineEndpoint({
  method: 'GET',
  path: `${ofSample}/columns`,
  summary: 'The quality of each column',
  params: SampleParams,
  response: ColumnList,
});
export const readDraft = defineEndpoint({
  method: 'GET',
  path: `${ofSample}/draft`,
  summary: 'The definition under edit, with the entity tag that a save needs',
  params: SampleParams,
  response: Draft,
});
export const saveDraft = defineEndpoint({
  method: 'PUT',
  path: `${ofSample}/draft`,
  summary: 'Save the definition under edit (If-Match)',
  params: SampleParams,
  body: DraftContent,
  response: Draft,
});
export const checkDraft = defineEndpoint({
  method: 'POST',
  path: `${ofSample}/draft/check`,
  summary: 'What the saved draft would give: the waterfall, or all that stands in the way',
  params: SampleParams,
  response: DraftCheck,
});
export const readDraftBalance = defineEndpoint({
  method: 'GET',
  path: `${ofSample}/draft/balance`,
  summary: 'How each characteristic is spread in the partitions of the draft, as it was last compared: inputs only',
  params: SampleParams,
  response: DraftBalance,
});
export const compareDraft = defineEndpoint({
  method: 'POST',
  path: `${ofSample}/draft/balance`,
  summary: 'Compare the partitions of the saved draft before it is confirmed, as a run (Idempotency-Key)',
  params: SampleParams,
  body: CompareDraft,
  response: Run,
  status: 202,
});
export const confirmDraft = defineEndpoint({
  method: 'POST',
  path: `${ofSample}/definitions`,
  summary: 'Confirm the draft: an immutable definition with its counts, as a run (Idempotency-Key)',
  params: SampleParams,
  body: ConfirmDraft,
  response: Run,
  status: 202,
});
export const listDefinitions = defineEndpoint({
  method: 'GET',
  path: `${ofSample}/definitions`,
  summary: 'Confirmed definitions, latest first',
  params: SampleParams,
  response: DefinitionList,
});
export const readDefinition = defineEndpoint({
  method: 'GET',
  path: `${ofSample}/definitions/:definitionId`,
  summary: 'One confirmed definition',
  params: DefinitionParams,
  response: Definition,
});
export const readBalance = defineEndpoint({
  method: 'GET',
  path: `${ofSample}/definitions/:definitionId/balance`,
  summary: 'How each characteristic is spread in hold-out and out-of-time against development: inputs only',
  params: DefinitionParams,
  response: PartitionBalance,
});

export const readQuality = defineEndpoint({
  method: 'GET',
  path: `${ofSample}/quality`,
  summary: 'The quality report of the latest definition: columns, months, flags with their answers',
  params: SampleParams,
  response: QualityState,
});
export const readColumnQuality = defineEndpoint({
  method: 'GET',
  path: `${ofSample}/quality/column`,
  summary: 'One column of the quality report: groups by outcome, histogram, months',
  params: SampleParams,
  query: QualityColumnQuery,
  response: ColumnQualityDetail,
});
export const makeQuality = defineEndpoint({
  method: 'POST',
  path: `${ofSample}/quality`,
  summary: 'Make the quality report of the latest definition, as a run (Idempotency-Key)',
  params: SampleParams,
  response: Run,
  status: 202,
});
export const answerFlag = defineEndpoint({
  method: 'POST',
  path: `${ofSample}/quality/answers`,
  summary: 'Answer a flag of the quality report: accepted because ..., or the column is not used',
  params: SampleParams,
  body: NewFlagAnswer,
  response: QualityState,
  status: 201,
});

export const readDictionary = defineEndpoint({
  method: 'GET',
  path: `${ofSample}/dictionary`,
  summary: 'The data dictionary, with the entity tag that a save needs',
  params: SampleParams,
  response: Dictionary,
});
export const saveDictionary = defineEndpoint({
  method: 'PUT',
  path: `${ofSample}/dictionary`,
  summary: 'Save the data dictionary (If-Match)',
  params: SampleParams,
  body: DictionaryContent,
  response: Dictionary,
});
export const exportDictionary = defineEndpoint({
  method: 'GET',
  path: `${ofSample}/dictionary/file`,
  summary: 'The data dictionary as CSV, with roles and special codes',
  params: SampleParams,
  response: 'bytes',
});
export const importDictionary = defineEndpoint({
  method: 'POST',
  path: `${ofSample}/dictionary/file`,
  summary: 'Take a dictionary from CSV: all of it, or every problem at once and nothing (If-Match)',
  params: SampleParams,
  body: DictionaryFile,
  response: Dictionary,
});
export const readColumnLabels = defineEndpoint({
  method: 'GET',
  path: '/api/sample-definitions/:definitionId/labels',
  summary: 'How the columns of a sample are called',
  params: ofDefinition,
  response: ColumnLabels,
});

export const listKeptSamples = defineEndpoint({
  method: 'GET',
  path: `${ofModel}/kept-samples`,
  summary: 'What is kept of applicants in a model: files, dates and what rests on them, no value of any row',
  params: SampleListParams,
  response: KeptSamples,
});
export const eraseSample = defineEndpoint({
  method: 'POST',
  path: `${ofSample}/erasure`,
  summary: 'Erase the rows of a sample for good, with the reason; what was counted stays',
  params: SampleParams,
  body: NewErasure,
  response: 'nothing',
});
