import { fastResamples } from '@tallystone/numeric';
import type { Specification } from '@tallystone/contracts/specification/types';
import { codeCharacteristics } from '../replay/coding';
import { choosePenalty, trainPaths } from '../replay/fit';
import { prepare } from '../replay/prepare';
import type { SourceColumn } from '../replay/source';
import { crewFor } from './crew';
import type { Task } from './task';

export interface ResamplePayload {
  /** Without folds and at one penalty: a batch refits, it does not choose. */
  readonly specification: Specification;
  readonly rows: number;
  readonly columns: ReadonlyMap<string, SourceColumn>;
  readonly seed: number;
  readonly first: number;
  readonly count: number;
}

export interface ResampleDraw {
  readonly resample: number;
  readonly intercept: number;
  readonly coefficients: Float64Array;
  readonly converged: boolean;
}

/**
 * One batch of a stability study: resamples `first` to `first + count - 1` of the study with this seed. A draw depends on the seed and its own
 * number alone, so batches can run anywhere and in any order. Stratified bootstrap (Efron and Tibshirani 1993); bins and WOE are held.
 */
export const resampleVersion: Task<ResamplePayload, ResampleDraw[]> = ({ specification, rows, columns, seed, first, count }, { cancelled, progress }) => {
  const source = { rows, column: (name: string) => columns.get(name) };
  const prepared = prepare(specification, source);
  const coded = codeCharacteristics(specification, source, prepared);
  const { path, index } = choosePenalty(specification, trainPaths({ specification, prepared, coded, source, crewFor }));
  const start = path.fits[index];
  return fastResamples(path.problem, start.lambda, {
    seed,
    first,
    count,
    start,
    onResample: (done, all) => {
      if (cancelled()) throw new Error('The study was cancelled');
      progress('Refitting resamples', done / all);
    },
  }).draws;
};
