import { auc, rankCorrelation } from '@tallystone/numeric';
import type { OutcomeRefits, Refit } from '@tallystone/contracts/fits/outcome-refits';
import type { Specification } from '@tallystone/contracts/specification/types';
import { decisionsChanged } from './decisions-changed';
import { etaOf, modelTables } from './design';
import { finishFit, trainPaths, type FitRequest, type FittedModel, type TrainedPath } from './fit';
import { knownRows } from './fit-rows';
import { gather } from './gather';
import { readings } from './indeterminates';
import { DEVELOPMENT, HOLD_OUT, INDETERMINATE, type Prepared } from './types';

export interface OutcomeRefitsRequest extends Pick<
  FitRequest,
  'specification' | 'prepared' | 'coded' | 'source' | 'crewFor' | 'onFit'
> {
  /** The path of the fit as it is defined. */
  readonly trained: TrainedPath;
  /** Places on that path at which it is fitted again. */
  readonly indices: readonly number[];
  /** Share of applicants that the fit as it is defined approves; absent while no cut-off is stated. */
  readonly approvalRate?: number;
}

/**
 * The fit again with every indeterminate of development as good, then as bad, at the same penalties. Bins, partition and penalty are held; WOE,
 * standardisation and coefficients are made anew. All three are scored on the same applicants, whose outcome is known either way: the hold-out, or
 * development where there is none. Out-of-time takes no part, so that nothing of it is told.
 *
 * @returns null where no row of development is indeterminate
 * @throws ReplayError for what the data make impossible
 * @example outcomeRefits({ specification, prepared, coded, trained, indices: [trained.crossValidation.minimum] })?.at[0].cases
 * Source: re-running with indeterminates as good, then as bad, is common practice.
 */
export function outcomeRefits(request: OutcomeRefitsRequest): OutcomeRefits | null {
  const { specification, prepared, coded, trained, indices } = request;
  const undecided = prepared.outcome.some((outcome, row) => outcome === INDETERMINATE && prepared.partition[row] === DEVELOPMENT);
  if (!undecided || indices.length === 0) return null;
  const partition = prepared.counts.holdOut.goods > 0 && prepared.counts.holdOut.bads > 0 ? HOLD_OUT : DEVELOPMENT;
  const rows = knownRows(prepared, (of) => of === partition);
  const outcome = gather(prepared.outcome, rows);
  const places = [...new Set(indices)].sort((a, b) => a - b);
  const atPlaces = pinned(specification, trained, places);
  const runs = readings.map(([indeterminates, code]) => {
    const read = code === INDETERMINATE ? prepared : readAs(prepared, code);
    const again: FitRequest = { ...request, specification: atPlaces, prepared: read };
    const path = code === INDETERMINATE ? null : trainPaths(again)[0];
    const fitted = places.map((place, k) => (path ? finishFit(again, path, k) : finishFit(request, trained, place)));
    return { indeterminates, counts: countDevelopment(read), fitted };
  });
  return {
    partition: partition === HOLD_OUT ? 'holdOut' : 'development',
    rows: rows.length,
    approvalRate: request.approvalRate ?? null,
    at: places.map((index, place) => {
      const scores = runs.map(({ fitted }) => scored(fitted[place], coded, rows));
      return {
        index,
        lambda: trained.fits[index].lambda,
        cases: runs.map(({ indeterminates, counts, fitted }, run): Refit => ({
          indeterminates,
          ...counts,
          kept: fitted[place].kept.filter(Boolean).length,
          converged: fitted[place].fit.status === 'converged',
          gini: 2 * auc(scores[run], outcome) - 1,
          rankCorrelation: finite(rankCorrelation(scores[0], scores[run])),
          decisionsChanged:
            request.approvalRate === undefined ? null : decisionsChanged(scores[0], scores[run], request.approvalRate),
        })),
      };
    }),
  };
}

/** The penalties of these places and nothing to choose. */
function pinned(specification: Specification, trained: TrainedPath, places: readonly number[]): Specification {
  const grid = places.map((place) => trained.fits[place].lambda);
  return {
    ...specification,
    fit: { ...specification.fit, mixing: trained.mixing, lambda: { grid }, choose: 'value', folds: null },
  };
}

function readAs(prepared: Prepared, code: number): Prepared {
  return {
    ...prepared,
    folds: null,
    foldCount: 0,
    outcome: prepared.outcome.map((outcome, row) =>
      outcome === INDETERMINATE && prepared.partition[row] === DEVELOPMENT ? code : outcome,
    ),
  };
}

function countDevelopment(read: Prepared): { goods: number; bads: number } {
  const rows = knownRows(read, (of) => of === DEVELOPMENT);
  const goods = rows.reduce((sum, row) => sum + read.outcome[row], 0);
  return { goods, bads: rows.length - goods };
}

function scored({ model, terms, trained }: FittedModel, coded: OutcomeRefitsRequest['coded'], rows: Uint32Array): Float64Array {
  return etaOf(modelTables(model, terms, coded, trained.tables), coded, rows);
}

const finite = (value: number): number | null => (Number.isFinite(value) ? value : null);
