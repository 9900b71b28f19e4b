import type { Sequelize } from 'sequelize';
import type { StepReport } from '../models/work';
import { findFits } from './find-fit';

/** The fit's notch: done once a penalty is chosen, a decision while a path waits for one. */
export async function fitWorkStep(sequelize: Sequelize, modelId: string): Promise<StepReport | null> {
  const fits = await findFits(sequelize, modelId);
  if (fits.length === 0) return null;
  const chosen = fits.find((fit) => fit.choice !== null);
  if (chosen?.choice) return { state: 'done', caption: `penalty ${short(chosen.choice.lambda)}` };
  if (fits.some((fit) => fit.state === 'ready')) return { state: 'decision', caption: 'Choose a penalty' };
  if (fits.some((fit) => fit.state === 'running' || fit.state === 'queued')) return { state: 'open', caption: 'Fitting' };
  return { state: 'decision', caption: 'Fit again' };
}

/** Two significant digits: enough for a caption. */
const short = (value: number): string => String(Number(value.toPrecision(2)));
