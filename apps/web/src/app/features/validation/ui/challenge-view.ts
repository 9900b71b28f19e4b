import type { Challenge } from '@tallystone/contracts/validation/schema';
import { count, fixed, significant } from '../../../ui/numbers';

/** Above this a variance inflation factor is flagged (common practice). */
export const inflationFlag = 5;

/** What gradient descent of fixed step reaches: closer agreement is not to be expected of the foreign library. */
export const foreignTolerance = 1e-3;

export interface ChallengeRow {
  readonly column: string;
  /** Null with `collinear`, and for the intercept. */
  readonly inflation: number | null;
  readonly collinear: boolean;
  readonly own: number | null;
  readonly foreign: number | null;
  readonly difference: number | null;
}

/** The intercept where there is a foreign fit, then the columns kept. */
export function challengeRows({ varianceInflation, foreign }: Challenge): ChallengeRow[] {
  const fitted = 'unavailable' in foreign ? null : foreign;
  const pairOf = (pair: { own: number; foreign: number } | undefined) =>
    pair
      ? { own: pair.own, foreign: pair.foreign, difference: Math.abs(pair.own - pair.foreign) }
      : { own: null, foreign: null, difference: null };
  const byColumn = new Map(fitted?.coefficients.map((pair) => [pair.column, pair]));
  const kept = varianceInflation.map(({ column, value }) => ({
    column,
    inflation: value,
    collinear: value === null,
    ...pairOf(byColumn.get(column)),
  }));
  return fitted ? [{ column: 'Intercept', inflation: null, collinear: false, ...pairOf(fitted.intercept) }, ...kept] : kept;
}

/** What is collinear, or the largest VIF; and whether the two libraries agree. */
export function challengeFinding({ varianceInflation, conditionIndex, foreign }: Challenge): string {
  if (varianceInflation.length === 0) return 'Nothing is kept, so there is nothing to challenge.';
  const collinear = varianceInflation.filter(({ value }) => value === null).map(({ column }) => column);
  const largest = varianceInflation.reduce((most, entry) => ((entry.value ?? 0) > (most.value ?? 0) ? entry : most));
  const flagged = varianceInflation.filter(({ value }) => value !== null && value > inflationFlag);
  const index = conditionIndex === null ? '' : `, the condition index ${fixed(conditionIndex, 1)}`;
  const first =
    collinear.length > 0
      ? `${collinear.join(', ')} ${collinear.length === 1 ? 'is' : 'are'} exactly collinear.`
      : flagged.length > 0
        ? `Flagged for collinearity: ${flagged.map(({ column, value }) => `${column} (VIF ${fixed(value, 1)})`).join(', ')}${index}.`
        : `No characteristic kept is nearly collinear: the largest VIF is ${fixed(largest.value, 2)} (${largest.column})${index}.`;
  if ('unavailable' in foreign) return `${first} No foreign challenger: ${foreign.unavailable}`;
  const { largestDifference } = foreign;
  const agree = largestDifference <= foreignTolerance;
  return `${first} A foreign library ${agree ? `finds the same unpenalised fit, to ${significant(largestDifference, 1)}` : `comes within ${significant(largestDifference, 2)} of the unpenalised fit`}.`;
}

export function foreignNote({ foreign }: Challenge): string {
  if ('unavailable' in foreign) return '';
  const of = foreign.rows === foreign.of ? `all ${count(foreign.of)}` : `${count(foreign.rows)} of ${count(foreign.of)}`;
  return `Foreign: ml-logistic-regression 2.0.0, plain gradient descent, on ${of} development rows; it reaches about ${significant(foreignTolerance, 1)}.`;
}
