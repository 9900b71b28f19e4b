import { availableParallelism } from 'node:os';
import { Worker } from 'node:worker_threads';
import { Alone, Team, type Crew } from '@tallystone/numeric/engine/crew';
import { entryFile } from '../running/entry-files';

/** Cells (rows times columns) from which on a helping thread gains more in every pass than it costs to wake; below, it is given folds as a whole. */
const WORTH_CELLS = 300_000;

let helper: Worker | null = null;

/**
 * Who works on a fit of this size in the calling thread: it alone, or with one helping thread, which lives on as long as the caller because starting
 * one takes longer than most fits. The results are the same either way.
 */
export function crewFor(cells: number): Crew {
  if (availableParallelism() < 2) return new Alone();
  if (cells < WORTH_CELLS) return new Alone((batch) => helperThread().postMessage(batch));
  return new Team([(order) => helperThread().postMessage(order)]);
}

function helperThread(): Worker {
  if (helper) return helper;
  const worker = new Worker(entryFile('threads/helper-entry'), { execArgv: [] });
  // It neither keeps the process alive nor outlives its owner.
  worker.unref();
  worker.once('exit', () => (helper = null));
  return (helper = worker);
}

/** Starts the helping thread ahead of need. */
export function warmCrew(): void {
  if (availableParallelism() >= 2) helperThread();
}
