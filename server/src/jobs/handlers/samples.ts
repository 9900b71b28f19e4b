import { confirmDefinition } from '../../services/samples/confirm-draft';
import { abandonReading, readFile } from '../../services/samples/read-file';
import { confirmSampleJob, readSampleJob } from '../definitions/samples';
import { handle } from '../handler';

export const readSample = handle(readSampleJob, {
  work: ({ sampleId, choices }, run) => readFile(sampleId, choices, run),
  abandon: (tx, run) => abandonReading(tx, run.id),
});

export const confirmSample = handle(confirmSampleJob, { work: (payload, run) => confirmDefinition(payload, run) });
