import { replayForFreezing, writeVersion } from '../../services/versions/freeze';
import { replicate, writeReplication } from '../../services/validation/replicate';
import { batchesOf, summariseStability, writeStability } from '../../services/validation/stability';
import { resamplePart } from '../definitions/parts';
import { freezeVersionJob, replicateVersionJob, studyStabilityJob } from '../definitions/versions';
import { handle } from '../handler';
import { spread } from '../parts/spread';

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
  async work(payload, inside) {
    const { context, run, finish, progress } = inside;
    const batches = batchesOf(payload);
    const draws = await spread(inside, resamplePart, batches, (share) => progress('Refitting resamples', share));
    const content = await summariseStability(context, payload, draws.flat());
    await finish((tx) => writeStability(context, tx, run, payload.versionId, content));
  },
});
