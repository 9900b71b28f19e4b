import type { OutcomeByRule, OutcomeDefinition } from './types';

/** Whether the outcome comes from a rule on days past due rather than from the texts of a column. */
export const isByRule = (outcome: OutcomeDefinition): outcome is OutcomeByRule => 'daysPastDue' in outcome;

/** The columns that an outcome is read from, the leading one first. */
export function outcomeColumns(outcome: OutcomeDefinition): string[] {
  if (!isByRule(outcome)) return [outcome.column];
  return [outcome.daysPastDue.column, ...(outcome.monthsOnBook === null ? [] : [outcome.monthsOnBook.column])];
}

/** Whether any row can be excluded by its outcome. */
export const outcomeExcludes = (outcome: OutcomeDefinition): boolean =>
  isByRule(outcome) ? outcome.monthsOnBook !== null || outcome.daysPastDue.missing === 'excluded' : outcome.excluded.length > 0;

/** Values of a column in words. @example listed(['', 'x']) // '(empty), x' */
export const listed = (values: readonly string[]): string =>
  values.length === 0 ? 'none' : values.map((value) => (value === '' ? '(empty)' : value)).join(', ');

/**
 * What each class means, in words, for documents and comparisons.
 * @example outcomeWords({ column: 'bad', good: ['0'], bad: ['1'], indeterminate: [], excluded: [] }).good // '0'
 */
export function outcomeWords(outcome: OutcomeDefinition): Record<'good' | 'bad' | 'indeterminate' | 'excluded', string> {
  if (!isByRule(outcome)) {
    const { good, bad, indeterminate, excluded } = outcome;
    return { good: listed(good), bad: listed(bad), indeterminate: listed(indeterminate), excluded: listed(excluded) };
  }
  const { daysPastDue: days, monthsOnBook: months } = outcome;
  const excluded = [
    ...(months === null ? [] : [`${months.column} below ${months.least}`]),
    ...(days.missing === 'excluded' ? ['missing'] : []),
  ];
  return {
    good: `${days.column} below ${days.indeterminate ?? days.bad}`,
    bad: `${days.column} of ${days.bad} or more`,
    indeterminate: days.indeterminate === null ? 'none' : `${days.column} from ${days.indeterminate} to below ${days.bad}`,
    excluded: excluded.length === 0 ? 'none' : excluded.join('; '),
  };
}
