import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import type { ColumnProfile, ColumnRole } from '@tallystone/contracts/samples/columns';
import type { ColumnTest, DraftContent, ExclusionRule, SampleDefinitionContent } from '@tallystone/contracts/samples/definition';
import { outcomeColumns } from '@tallystone/contracts/specification/outcome';
import type { Exclusion, OutcomeDefinition, RowTest } from '@tallystone/contracts/specification/types';

export type Say = (code: string, message: string, where: ProblemItem['where']) => void;

export function outcomeOf({ rule, ...values }: DraftContent['outcome'], column: string): OutcomeDefinition {
  if (!rule) return { column, ...values };
  const { bad, indeterminate, missing, monthsOnBook } = rule;
  return { daysPastDue: { column, bad, indeterminate, missing }, monthsOnBook };
}

const testOf = (test: ColumnTest): ColumnTest =>
  Object.fromEntries(Object.entries(test).filter(([, value]) => value !== undefined)) as ColumnTest;

export function exclusionOf(rule: ExclusionRule): Exclusion {
  const reason = rule.reason.trim();
  const tests = rule.tests.map(testOf);
  if (tests.length === 1) return { reason, ...tests[0] };
  return rule.combine === 'all' ? { reason, all: tests } : { reason, any: tests };
}

export const declinedOf = (
  { values }: NonNullable<DraftContent['declined']>,
  column: string,
): NonNullable<SampleDefinitionContent['declined']> => ({
  column,
  values,
  method: 'none',
  bands: 10,
  uplift: 1.5,
});

/** Kept as keyed hashes from the confirmation on: no rule can rest on their values. */
export const identifiersOf = (draft: DraftContent): ReadonlySet<string> =>
  new Set(draft.columns.filter(({ role }) => role === 'identifier').map(({ column }) => column));

/** What stands in the way of an exclusion. */
export function checkRule(
  rule: ExclusionRule,
  place: number,
  profiles: ReadonlyMap<string, ColumnProfile>,
  identifiers: ReadonlySet<string>,
  say: Say,
): void {
  const where = { section: 'exclusions', rule: place + 1 };
  const name = rule.reason.trim() === '' ? `Exclusion ${place + 1}` : `“${rule.reason.trim()}”`;
  if (rule.reason.trim() === '')
    say('no-reason', `${name} has no reason. Say why these rows do not belong in the sample.`, where);
  if (rule.tests.length === 0) say('no-test', `${name} tests nothing.`, where);
  rule.tests.forEach((test, index) => {
    const at = { ...where, test: index + 1, column: test.column };
    const profile = profiles.get(test.column);
    if (!profile) {
      say('no-such-column', `${name} tests ${test.column || 'no column'}, which the file does not have.`, at);
      return;
    }
    const { column, ...conditions } = test;
    const stated = Object.values(conditions).filter((condition) => condition !== undefined);
    if (stated.length === 0) say('no-condition', `${name} says nothing about ${column}.`, at);
    if (test.in?.length === 0 || test.notIn?.length === 0) say('no-values', `${name} lists no value of ${column}.`, at);
    const limits = [test.below, test.atMost, test.above, test.atLeast].filter((one) => one !== undefined);
    if (limits.length > 0 && profile.kind === 'categorical')
      say('not-comparable', `${name} compares ${column} with a limit, and it holds neither numbers nor dates.`, at);
    if (profile.kind === 'numeric' && limits.some((one) => typeof one !== 'number'))
      say('not-comparable', `${name} compares the numbers of ${column} with a date.`, at);
    if (profile.kind === 'date' && limits.some((one) => typeof one !== 'string'))
      say('not-comparable', `${name} compares the dates of ${column} with a number.`, at);
    if ((profile.hashed || identifiers.has(column)) && (test.in || test.notIn))
      say('kept-as-hashes', `${name} lists values of ${column}, which are kept as keyed hashes.`, at);
    else if (!profile.hashed && identifiers.has(column) && limits.length > 0)
      say('kept-as-hashes', `${name} compares ${column} with a limit, and an identifier is kept as keyed hashes.`, at);
  });
}

/** What a draft says of its rows that can be carried out already, whatever else still stands in its way. */
export interface Settled {
  readonly exclusions: Exclusion[];
  /** Null while no column is the outcome. */
  readonly outcome: OutcomeDefinition | null;
  readonly declined: SampleDefinitionContent['declined'];
}

/** An exclusion without a reason takes its rows out as well: the reason is asked for elsewhere. */
export function settledOf(draft: DraftContent, profiles: readonly ColumnProfile[]): Settled {
  const byName = new Map(profiles.map((profile) => [profile.column, profile]));
  const holder = (role: ColumnRole): string | undefined => draft.columns.find((column) => column.role === role)?.column;
  const isSound = (rule: ExclusionRule): boolean => {
    let sound = true;
    checkRule({ ...rule, reason: 'any' }, 0, byName, identifiersOf(draft), () => (sound = false));
    return sound;
  };
  const [outcome, decision] = [holder('outcome'), holder('decision')];
  return {
    exclusions: draft.exclusions.filter(isSound).map(exclusionOf),
    outcome: outcome !== undefined && byName.has(outcome) ? outcomeOf(draft.outcome, outcome) : null,
    declined: draft.declined && decision !== undefined && byName.has(decision) ? declinedOf(draft.declined, decision) : null,
  };
}

/** Every column that exclusions, outcome and decision are read from. */
export function columnsOfSettled({ exclusions, outcome, declined }: Settled): Set<string> {
  const names = new Set(outcome ? outcomeColumns(outcome) : []);
  const ofTest = (test: RowTest): void => {
    if ('all' in test) test.all.forEach(ofTest);
    else if ('any' in test) test.any.forEach(ofTest);
    else names.add(test.column);
  };
  exclusions.forEach(ofTest);
  if (declined) names.add(declined.column);
  return names;
}
