import { comparePartitions } from '../../services/samples/compare-draft';
import { confirmDefinition } from '../../services/samples/confirm-draft';
import { abandonReading, readFile } from '../../services/samples/read-file';
import { makeReport, storeReport } from '../../services/samples/quality/make-report';
import { compareDraftJob, confirmSampleJob, readSampleJob, reportQualityJob } from '../definitions/samples';
import { handle } from '../handler';

export const readSample = handle(readSampleJob, {
  work: ({ sampleId, choices }, run) => readFile(sampleId, choices, run),
  abandon: (tx, run) => abandonReading(tx, run.id),
});

export const compareDraft = handle(compareDraftJob, { work: (payload, run) => comparePartitions(payload, run) });

export const confirmSample = handle(confirmSampleJob, { work: (payload, run) => confirmDefinition(payload, run) });

/** Nothing is stored before the last column is counted, so an attempt that ends early leaves nothing behind. */
export const reportQuality = handle(reportQualityJob, {
  async work({ definitionId }, run) {
    const made = await makeReport(definitionId, run);
    await run.finish((tx) => storeReport(run.context.sequelize, tx, run.run.id, made));
  },
});
