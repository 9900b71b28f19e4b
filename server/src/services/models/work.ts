import type { ModelWork, WorkStep, WorkStepName, WorkStepState } from '@tallystone/contracts/models/schema';
import type { Sequelize } from 'sequelize';
import { binningWorkStep } from '../binnings/work-step';
import { fitWorkStep } from '../fits/work-step';
import { sampleWorkStep } from '../samples/work-step';
import { scorecardWorkStep } from '../scorecards/work-step';
import { documentationWorkStep, validationWorkStep, versionWorkStep } from '../versions/work-step';

/** What one entity says about its step: whether it is done or waits for a decision, in one short caption. */
export interface StepReport {
  readonly state: 'done' | 'open' | 'decision';
  readonly caption: string;
}

/** Makes the report of a step for one model. Null: nothing is there yet. */
export type StepReporter = (sequelize: Sequelize, modelId: string) => Promise<StepReport | null>;

const captions: Record<WorkStepName, string> = {
  sample: 'No sample yet',
  binning: 'After the sample',
  fit: 'After the binning',
  scorecard: 'After the fit',
  version: 'After the scorecard',
  validation: 'After submission',
  documentation: 'After freezing',
};

/** One per step, in the order of the work. Each entity states its own in `services/<entity>/work-step.ts`. */
const reporters: Record<WorkStepName, StepReporter> = {
  sample: sampleWorkStep,
  binning: binningWorkStep,
  fit: fitWorkStep,
  scorecard: scorecardWorkStep,
  version: versionWorkStep,
  validation: validationWorkStep,
  documentation: documentationWorkStep,
};

/** The work's rule. The first step that is not done is the current one; a step that waits for a decision says so wherever it stands. */
export async function modelWork(sequelize: Sequelize, modelId: string, given: Record<WorkStepName, StepReporter> = reporters): Promise<ModelWork> {
  const names = Object.keys(given) as WorkStepName[];
  const reports = await Promise.all(names.map((name) => given[name](sequelize, modelId)));
  let reached = false;
  const steps = names.map((step, place): WorkStep => {
    const report = reports[place];
    let state: WorkStepState;
    if (report?.state === 'done') state = 'done';
    else if (report?.state === 'decision') state = 'decision';
    else state = reached ? 'ahead' : 'current';
    if (report?.state !== 'done') reached = true;
    return { step, state, caption: report?.caption ?? captions[step], path: `/models/${modelId}/${step}` };
  });
  return { steps };
}
