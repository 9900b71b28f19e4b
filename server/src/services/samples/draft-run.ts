import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import type { Transaction } from 'sequelize';
import type { Context } from '../../context';
import type { compareDraftJob, confirmSampleJob } from '../../jobs/definitions/samples';
import { startRun } from '../../jobs/start-run';
import type { Actor } from '../../models/person';
import type { Run } from '../../models/run';
import { Sample } from '../../models/sample';
import { Problem, conflict, invalid } from '../../problems/problem';
import { type CarriedOut, carryOut } from './carry-out';
import { type FoundDraft, findDraft, presentDraft } from './draft';
import { type FoundSample, findSample } from './find-sample';

/**
 * Starts a run on the draft as it was last read.
 *
 * @param further what stands in the way beside what the columns tell
 * @throws Problem 412 when the draft was saved since, 422 with everything that can be seen to stand in the way, 409 while something runs
 */
export async function startOnDraft(
  context: Context,
  tx: Transaction,
  job: typeof compareDraftJob | typeof confirmSampleJob,
  asked: {
    readonly person: Actor;
    readonly draft: FoundDraft;
    readonly revision: number;
    readonly requestId: string;
    readonly further?: readonly ProblemItem[];
  },
): Promise<Run> {
  const { person, draft, revision, requestId, further = [] } = asked;
  const { sample } = draft;
  if (draft.revision !== revision)
    throw new Problem(412, 'stale', 'The draft was saved since you read it. Look at it as it is now, then go on.');
  const { problems } = await presentDraft(context, draft, tx);
  if (problems.length + further.length > 0) throw invalid([...problems, ...further]);
  if (sample.busy) throw conflict('busy', 'Something runs on this sample already. Wait for it or cancel it.');
  return startRun(context, tx, job, {
    payload: { sampleId: sample.id, revision },
    person,
    modelId: sample.modelId,
    entity: 'sample',
    entityId: sample.id,
    rowsOf: { sampleId: sample.id },
    singleton: sample.id,
    requestId,
  });
}

type Done = Exclude<CarriedOut, { content: null }>;

/**
 * The draft that a run was started on, carried out on every row.
 *
 * @throws Problem 412 when it was saved since, 422 with everything that stands in the way
 */
export async function carryOutDraft(
  context: Context,
  payload: { readonly sampleId: string; readonly revision: number },
  signal: AbortSignal,
): Promise<{ readonly sample: FoundSample } & Pick<Done, 'content' | 'answer'>> {
  const row = await Sample.findByPk(payload.sampleId, { rejectOnEmpty: true });
  const sample = await findSample(context.sequelize, row.modelId, row.id);
  const draft = await findDraft(context, sample);
  if (!sample || !draft || draft.revision !== payload.revision)
    throw new Problem(412, 'stale', 'The draft was saved since this was asked for. Look at it as it is now, then ask again.');
  const { problems, content, answer } = await carryOut(context, sample, draft.content, signal);
  if (problems) {
    const detail =
      problems.length === 1
        ? problems[0].message
        : `${problems.length} things stand in the way; the first: ${problems[0].message}`;
    throw new Problem(422, 'not-confirmed', detail, { problems });
  }
  return { sample, content, answer };
}
