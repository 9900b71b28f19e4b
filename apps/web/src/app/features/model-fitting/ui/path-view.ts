import { inferenceNames } from '@tallystone/contracts/fits/inference';
import type { DeclinedMethod, FitPath } from '@tallystone/contracts/fits/schema';
import { scaleToPoints } from '@tallystone/numeric/scaling/points';
import { inferenceCaution } from '../../../ui/inference';
import { fixed, plural, share, significant } from '../../../ui/numbers';

/** One characteristic at one penalty, as the column beside the figure lists it. */
export interface CharacteristicAtPenalty {
  readonly column: string;
  readonly label: string;
  readonly treatment: 'free' | 'always kept' | 'left out';
  readonly coefficient: number;
  readonly kept: boolean;
  /** Points of each bin, rounded; empty while not kept. */
  readonly points: readonly number[];
  /** Largest less smallest points; null while not kept. */
  readonly range: number | null;
  /** Kept with a negative coefficient: a higher WOE would cost points. */
  readonly againstWoe: boolean;
}

/** The index at which each characteristic first enters (from the largest penalty down); the number of penalties where it never does. */
export function entries(path: Pick<FitPath, 'coefficients' | 'characteristics'>): number[] {
  return path.characteristics.map((_, j) => {
    const at = path.coefficients.findIndex((row) => row[j] !== 0);
    return at < 0 ? path.coefficients.length : at;
  });
}

/** Characteristics in the order they enter the path; those that enter together by the size of their coefficient at the end. */
export function entryOrder(path: Pick<FitPath, 'coefficients' | 'characteristics'>): number[] {
  const at = entries(path);
  const last = path.coefficients[path.coefficients.length - 1] ?? [];
  return path.characteristics
    .map((_, j) => j)
    .sort((a, b) => at[a] - at[b] || Math.abs(last[b] ?? 0) - Math.abs(last[a] ?? 0) || a - b);
}

/**
 * The scorecard at one penalty: all arithmetic is the library's, on coefficients and WOE that came with the path, so that moving along
 * the path asks nothing of the server.
 */
export function scorecardAt(path: FitPath, index: number): CharacteristicAtPenalty[] {
  const coefficients = path.coefficients[index];
  const kept = path.characteristics.map((_, j) => j).filter((j) => coefficients[j] !== 0);
  const scaled = scaleToPoints(path.scaling, {
    intercept: path.intercepts[index],
    terms: kept.map((j) => ({ coefficient: coefficients[j], woe: path.characteristics[j].bins.map((bin) => bin.woe) })),
  });
  const points = new Map(kept.map((j, k) => [j, scaled.pointsRounded[k]]));
  return path.characteristics.map(({ column, label, treatment }, j) => {
    const own = points.get(j) ?? [];
    return {
      column,
      label,
      treatment,
      coefficient: coefficients[j],
      kept: own.length > 0,
      points: own,
      range: own.length > 0 ? Math.max(...own) - Math.min(...own) : null,
      againstWoe: coefficients[j] < 0,
    };
  });
}

const words = ['no', 'one', 'two', 'three', 'four', 'five', 'six', 'seven', 'eight', 'nine', 'ten', 'eleven', 'twelve'];
const inWords = (n: number): string => words[n] ?? String(n);
const capital = (text: string): string => text.charAt(0).toUpperCase() + text.slice(1);

/** "Lasso over 100 penalties, ten folds". */
export function pathTitle(path: FitPath, mixing: number): string {
  const kind = mixing === 1 ? 'Lasso' : mixing === 0 ? 'Ridge' : `Elastic net (mixing ${significant(mixing, 2)})`;
  return `${kind} over ${plural(path.lambdas.length, 'penalty', 'penalties')}, ${inWords(path.crossValidation.folds)} folds`;
}

/**
 * The sentence over the figure. Rules, the first that holds:
 * 1. the smallest cross-validated deviance lies at the end of the grid: the path was cut short, so say that first;
 * 2. the one-standard-error rule keeps fewer than the minimum-deviance rule: what the others would add;
 * 3. else how many are kept at the smallest deviance.
 */
export function pathFinding(path: FitPath): string {
  const { minimum, oneStandardError, mean, atGridEnd } = path.crossValidation;
  const few = path.kept[oneStandardError];
  const many = path.kept[minimum];
  if (atGridEnd) {
    return `The smallest deviance lies at the end of the path: a smaller penalty might predict better. ${capital(inWords(many))} ${many === 1 ? 'characteristic is' : 'characteristics are'} kept there.`;
  }
  if (few > 0 && few < many) {
    const gain = mean[oneStandardError] - mean[minimum];
    const others = many - few;
    return `${capital(inWords(few))} ${few === 1 ? 'characteristic carries' : 'characteristics carry'} the model; the ${others === 1 ? 'one that follows adds' : `${inWords(others)} that follow add`} ${fixed(gain, 4)} of deviance${others === 1 ? '' : ' between them'}, inside one standard error.`;
  }
  return `${capital(inWords(many))} of ${path.characteristics.length} characteristics ${many === 1 ? 'is' : 'are'} kept at the smallest deviance.`;
}

/** What the prior correction did to the intercept at this penalty, and what it did not do; null where none is stated. */
export function correctionWords(path: Pick<FitPath, 'priorCorrection' | 'intercepts'>, index: number): string | null {
  if (path.priorCorrection === null) return null;
  const { sampleBadRate, populationBadRate, shift } = path.priorCorrection;
  const corrected = path.intercepts[index];
  return `Prior correction: the intercept moves from ${fixed(corrected - shift, 3)} to ${fixed(corrected, 3)}, from the bad rate of the fitted rows, ${share(sampleBadRate)}, to that of the population, ${share(populationBadRate)}. Probabilities and points of every applicant shift by the same log odds; the order of applicants, AUC and KS stay. Calibration in the large is held against the sample and reads off by about ${fixed(Math.abs(shift), 2)}.`;
}

/** What inference means for a reader of this fit; null for a fit on accepted applicants alone. */
export function inferenceWords(method: DeclinedMethod): string | null {
  return method === 'none' ? null : `Declined applicants enter WOE and fit by ${inferenceNames[method]}. ${inferenceCaution}`;
}

/** Which rule, if any, this penalty is the choice of. The one-standard-error rule goes first where both point at the same penalty. */
export function ruleAt(path: FitPath, index: number): 'minimum' | 'one-standard-error' | null {
  if (index === path.crossValidation.oneStandardError) return 'one-standard-error';
  if (index === path.crossValidation.minimum) return 'minimum';
  return null;
}

/** "one standard error: penalty 0.0095". */
export function notchLabel(path: FitPath, index: number): string {
  const rule = ruleAt(path, index);
  const penalty = `penalty ${significant(path.lambdas[index], 2)}`;
  if (rule === 'one-standard-error') return `one standard error: ${penalty}`;
  if (rule === 'minimum') return `smallest deviance: ${penalty}`;
  return penalty;
}

/** The index whose penalty lies nearest to `lambda` on the logarithmic axis. */
export function nearestIndex(lambdas: readonly number[], lambda: number): number {
  const wanted = Math.log(lambda);
  let best = 0;
  for (let i = 1; i < lambdas.length; i += 1) {
    if (Math.abs(Math.log(lambdas[i]) - wanted) < Math.abs(Math.log(lambdas[best]) - wanted)) best = i;
  }
  return best;
}

/** What did not converge at this penalty, and what to do; null where all did. */
function unprovenAt({ status, crossValidation }: FitPath, index: number): string | null {
  const way =
    'Join bins that hold few goods or bads, leave out a characteristic that separates them, or keep to a larger penalty.';
  if (status[index] === 'separation')
    return `The fit at this penalty has no finite optimum: characteristics separate goods from bads. ${way}`;
  if (status[index] !== 'converged') return `The fit at this penalty did not reach its tolerance. ${way}`;
  if ((crossValidation.notConverged ?? []).includes(index))
    return `The fit of a fold at this penalty did not reach its tolerance: its cross-validated deviance is not proven. ${way}`;
  return null;
}

/**
 * What at this penalty wants a decision, the weightiest first; null where nothing does. A fit that did not converge goes before all: nothing shown of it is
 * proven. Signs against WOE go before an uncertain next characteristic, because they block a submission until justified.
 */
export function decisionAt(path: FitPath, index: number): string | null {
  const unproven = unprovenAt(path, index);
  if (unproven) return unproven;
  const against = scorecardAt(path, index).filter((entry) => entry.againstWoe);
  if (against.length > 0) {
    const names = against.slice(0, 3).map((entry) => entry.label);
    const more = against.length > 3 ? ` and ${against.length - 3} more` : '';
    return against.length === 1
      ? `${names[0]}: the coefficient runs against WOE. Constrain the sign, leave it out, or justify it before submission.`
      : `${names.join(', ')}${more}: the coefficients run against WOE. Constrain the signs, leave them out, or justify them before submission.`;
  }
  const next = path.kept.findIndex((kept, i) => i > index && kept > path.kept[index]);
  const { oneStandardError, minimum } = path.crossValidation;
  if (index < oneStandardError)
    return 'This penalty is above the one-standard-error rule: cross-validated deviance is worse than chance would explain.';
  if (next > 0 && next <= minimum) {
    const entering = path.characteristics.filter((_, j) => path.coefficients[index][j] === 0 && path.coefficients[next][j] !== 0);
    if (entering.length > 0) {
      const it = entering.length === 1 ? 'it' : 'them';
      return `${entering.map((entry) => entry.label).join(', ')} would enter at penalty ${significant(path.lambdas[next], 2)}. Take ${it} or leave ${it}, and say why.`;
    }
  }
  return null;
}

/**
 * Where a text of this width (px) stands at a line at `x`: right of the line, left of it, else at an edge of the figure, wherever another
 * line, at `other`, does not run through it; null where it finds no room.
 */
export function placeBeside(
  x: number,
  width: number,
  { left, right }: { readonly left: number; readonly right: number },
  other: number,
): { readonly x: number; readonly anchor: 'start' | 'end' } | null {
  const places = [
    { x: x + 6, anchor: 'start', from: x + 6 },
    { x: x - 6, anchor: 'end', from: x - 6 - width },
    { x: right, anchor: 'end', from: right - width },
    { x: left, anchor: 'start', from: left },
  ] as const;
  const place = places.find(
    ({ from }) => from >= left && from + width <= right && (other < from - 4 || other > from + width + 4),
  );
  return place ? { x: place.x, anchor: place.anchor } : null;
}
