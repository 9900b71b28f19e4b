import { replayForFreezing, writeVersion } from '../../services/versions/freeze';
import { replicate, writeReplication } from '../../services/validation/replicate';
import { studyStability, writeStability } from '../../services/validation/stability';
import { freezeVersionJob, replicateVersionJob, studyStabilityJob } from '../definitions/versions';
import { handle } from '../handler';

export const freezeVersion = handle(freezeVersionJob, {
  async work(payload, { context, run, signal, progress, finish }) {
    const freezing = await replayForFreezing(context, payload, { signal, onProgress: progress });
    await finish((tx) => writeVersion(context, tx, run, payload.note, freezing));
  },
});

export const replicateVersion = handle(replicateVersionJob, {
  async work(payload, { context, run, signal, progress, finish }) {
    const content = await replicate(context, payload, { signal, onProgress: progress });
    await finish((tx) => writeReplication(context, tx, run, payload.versionId, content));
  },
});

export const studyVersionStability = handle(studyStabilityJob, {
  async work(payload, { context, run, signal, progress, finish }) {
    const content = await studyStability(context, payload, { signal, onProgress: progress });
    await finish((tx) => writeStability(context, tx, run, payload.versionId, content));
  },
});
