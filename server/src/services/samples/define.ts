import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import { type ColumnProfile, type ColumnRole, singleRoles } from '@tallystone/contracts/samples/columns';
import type { DefinedColumn, DraftContent, DraftOutcomeRule, SampleDefinitionContent } from '@tallystone/contracts/samples/definition';
import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import { unnamedCode } from '@tallystone/contracts/samples/special-codes';
import type { GroupsBy, Partition } from '@tallystone/contracts/specification/types';
import { thin } from '../../profiling/kind';
import { type NumberReader, numberReader } from '../../reading/index';
import { type Say, checkRule, declinedOf, exclusionOf, identifiersOf, outcomeOf } from './settled';
import { type WeightFaults, weightSentences } from './weight-sentences';

export interface DefinedSample {
  readonly sha256: string;
  readonly reading: ReadingChoices;
  readonly profiles: readonly ColumnProfile[];
  /** What is wrong with the weights, counted on the rows; null where nothing is, or no column has the role. */
  readonly weights: WeightFaults | null;
}

export interface Defined {
  /** Null while there is any problem. */
  readonly content: SampleDefinitionContent | null;
  readonly problems: ProblemItem[];
}

/**
 * Turns a draft into the head of a specification, or says everything that stands in the way. What only the rows can tell (values that are
 * mapped nowhere, weights that are no weights) comes from `prepare` afterwards.
 */
export function define(draft: DraftContent, sample: DefinedSample): Defined {
  const problems: ProblemItem[] = [];
  const say = (code: string, message: string, where: ProblemItem['where']): void => void problems.push({ code, message, where });
  const profiles = new Map(sample.profiles.map((profile) => [profile.column, profile]));
  const holder = (role: ColumnRole): DefinedColumn | undefined => draft.columns.find((column) => column.role === role);

  checkColumns(draft, profiles, { reader: numberReader(sample.reading), weights: sample.weights }, say);
  const outcome = holder('outcome');
  if (!outcome)
    say('no-outcome', 'No column has the role of the outcome. Choose the one that says how the loan went.', {
      section: 'columns',
    });
  else if (draft.outcome.rule) checkRuleOfOutcome(draft, draft.outcome.rule, outcome, profiles, say);
  else checkOutcome(draft, profiles.get(outcome.column), say);
  const decision = holder('decision');
  if (draft.declined && !decision)
    say('no-decision', 'Declined applicants are named by values of a decision column, and no column has that role.', {
      section: 'outcome',
    });
  if (draft.declined && draft.declined.values.length === 0)
    say('no-declined', 'Say which values of the decision mean declined, or treat nobody as declined.', { section: 'outcome' });
  const identifiers = identifiersOf(draft);
  draft.exclusions.forEach((rule, place) => checkRule(rule, place, profiles, identifiers, say));
  const groupKey = holder('group key');
  // Of hashes the file knows nothing: their groups are drawn by the rows where they begin.
  const groupsBy = groupKey && profiles.get(groupKey.column)?.hashed ? ({ groupsBy: 'first-row' } as const) : {};
  const partition = partitionOf(draft, holder, groupsBy, say);
  if (problems.length > 0 || !outcome || !partition) return { content: null, problems };

  const weight = holder('weight');
  return {
    content: {
      data: { sha256: sample.sha256, ...withoutDefault(sample.reading) },
      exclusions: draft.exclusions.map(exclusionOf),
      outcome: outcomeOf(draft.outcome, outcome.column),
      declined: draft.declined && decision ? declinedOf(draft.declined, decision.column) : null,
      weight: weight ? { column: weight.column } : null,
      partition,
      ...groupsBy,
      columns: draft.columns,
    },
    problems,
  };
}

/** What a specification says by leaving it out, so that it keeps the fingerprint that it always had: year, month, day, times as texts, and no column apart. */
function withoutDefault({ dateOrder, dateTimes, notDates, ...reading }: ReadingChoices): ReadingChoices {
  return {
    ...reading,
    ...(dateOrder === undefined || dateOrder === 'year-month-day' ? {} : { dateOrder }),
    ...(dateTimes === 'day' && { dateTimes }),
    ...(notDates && notDates.length > 0 && { notDates }),
  };
}

/** What is known beside the profiles: how numbers are written, and what is wrong with the weights. */
interface Known {
  readonly reader: NumberReader;
  readonly weights: WeightFaults | null;
}

function checkColumns(draft: DraftContent, profiles: ReadonlyMap<string, ColumnProfile>, known: Known, say: Say): void {
  const seen = new Set<string>();
  for (const entry of draft.columns) {
    const { column } = entry;
    const where = { section: 'columns', column };
    if (seen.has(column)) say('column-twice', `${column} is listed twice.`, where);
    seen.add(column);
    const profile = profiles.get(column);
    if (!profile) say('no-such-column', `The file has no column ${column}.`, where);
    else checkColumn(entry, profile, known, say);
  }
  const forgotten = [...profiles.keys()].filter((column) => !seen.has(column));
  if (forgotten.length > 0)
    say('columns-forgotten', `These columns of the file have no role: ${forgotten.slice(0, 10).join(', ')}.`, {
      section: 'columns',
    });
  for (const role of singleRoles) {
    const holders = draft.columns.filter((column) => column.role === role).map(({ column }) => column);
    if (holders.length > 1)
      say('role-twice', `Only one column can be the ${role}: ${holders.join(', ')} are.`, { section: 'columns', role });
  }
  if (!draft.columns.some(({ role }) => role === 'characteristic')) {
    say('no-characteristic', 'No column has the role of a characteristic: there is nothing to class or fit.', {
      section: 'columns',
    });
  }
}

const ofValues: readonly ColumnRole[] = ['characteristic', 'incumbent score'];

function checkColumn(entry: DefinedColumn, profile: ColumnProfile, { reader, weights }: Known, say: Say): void {
  const { column, kind, role } = entry;
  const where = { section: 'columns', column };
  const texts = new Set(entry.special.flatMap(({ values }) => values.filter((value) => typeof value === 'string')));
  const unreadable = profile.flags.find(
    ({ code, values }) => code === 'unreadable-numbers' && !(values?.length && values.every((text) => texts.has(text))),
  );
  // Numbers among which codes in words stand so often that reading takes them for categories.
  const numbersAmongCodes = texts.size > 0 && profile.flags.some(({ code }) => code === 'numbers-as-text');
  if (ofValues.includes(role) && kind === 'numeric') {
    if (profile.kind !== 'numeric' && !(numbersAmongCodes && role === 'characteristic'))
      say(
        'not-numeric',
        `${column} holds no numbers as the file was read. Treat it as categorical, or read the file with other choices.`,
        where,
      );
    else if (unreadable)
      say(
        'unreadable-numbers',
        `${column}: ${unreadable.finding} Name them as special codes, read the file again with these as missing tokens (the column’s own part offers both in one step), treat the column as categorical, or do not use it.`,
        where,
      );
  }
  const mixed = profile.flags.find(({ code }) => code === 'mixed-numbers');
  if (role === 'characteristic' && mixed) say('mixed-numbers', `${column}: ${mixed.finding}`, where);
  // A column of weights that holds anything else is told by its counts below.
  if (role === 'incumbent score' || (role === 'weight' && (weights?.unreadable ?? 0) === 0)) {
    if (kind !== 'numeric') say('not-numeric', `A ${role} is numeric; ${column} is ${kind}.`, where);
  }
  const faults = role === 'weight' && weights ? weightSentences(column, weights) : [];
  for (const { code, message } of faults) say(code, message, where);
  if (role === 'application date' && profile.kind !== 'date')
    say(
      'not-a-date',
      `${column} holds no dates as the file was read. Dates are YYYY-MM-DD, or in the date order of the reading choices.`,
      where,
    );
  if (role === 'characteristic' && kind === 'date')
    say('date-characteristic', `${column} is a date: no characteristic as it stands.`, where);
  if (profile.hashed && !['identifier', 'group key', 'not used'].includes(role)) {
    say(
      'kept-as-hashes',
      `${column} identifies people and is kept as keyed hashes: it can be an identifier, the group key or not used, nothing else.`,
      where,
    );
  }
  if (role === 'characteristic' && profile.distinct === 0) say('all-missing', `${column} is missing in every row.`, where);
  checkSpecials(entry, reader, say);
  checkSuspects(entry, profile, say);
}

function checkSpecials({ column, kind, special }: DefinedColumn, reader: NumberReader, say: Say): void {
  const seen = new Set<string>();
  for (const { label, values } of special) {
    for (const value of values) {
      const where = { section: 'columns', column, value };
      if (kind === 'numeric' && typeof value === 'string' && !Number.isNaN(reader.read(value)))
        say('special-is-number', `${column}: the special code ${JSON.stringify(value)} is a number. Give it as one.`, where);
      if (kind !== 'numeric' && typeof value !== 'string')
        say('special-not-text', `${column}: the special code ${value} is to be given as text.`, where);
      if (seen.has(String(value)))
        say('special-twice', `${column}: the special code ${value} is listed twice (${label}).`, where);
      seen.add(String(value));
    }
    if (label.trim() === '' || label.trim() === unnamedCode)
      say('special-unnamed', `${column}: say what the special code ${values.join(', ')} means.`, {
        section: 'columns',
        column,
        value: values.join(', '),
      });
  }
}

/** A code that is taken for an amount moves every class and coefficient: whoever defines the sample says which it is. */
function checkSuspects({ column, kind, role, special, amounts = [] }: DefinedColumn, profile: ColumnProfile, say: Say): void {
  if (role !== 'characteristic' || kind !== 'numeric') return;
  const answered = new Set([...special.flatMap(({ values }) => values.map(String)), ...amounts]);
  for (const { value, count } of profile.specialSuspects.filter((suspect) => !answered.has(suspect.value) && !answered.has(String(Number(suspect.value)))))
    say(
      'special-code-suspected',
      `${column} is ${value} in ${thin(count)} rows, which looks like a special code. Say what it means, or that it is an amount.`,
      { section: 'columns', column, value, count },
    );
}

function checkOutcome(draft: DraftContent, profile: ColumnProfile | undefined, say: Say): void {
  const { outcome } = draft;
  const section = 'outcome';
  if (outcome.good.length === 0) say('no-good', 'No value of the outcome means good.', { section });
  if (outcome.bad.length === 0) say('no-bad', 'No value of the outcome means bad.', { section });
  const mapped = [...outcome.good, ...outcome.bad, ...outcome.indeterminate, ...outcome.excluded];
  for (const value of new Set(mapped.filter((one, place) => mapped.indexOf(one) !== place))) {
    say('value-twice', `The outcome ${JSON.stringify(value)} means two things at once.`, { section, value });
  }
  if (!profile) return;
  if (!profile.valuesComplete) {
    say(
      'outcome-values',
      `${profile.column} has ${thin(profile.distinct)} different values: an outcome has a few. Choose another column.`,
      { section, column: profile.column },
    );
    return;
  }
  const present = profile.mostFrequent.filter(({ value }) => mapped.includes(value));
  if (present.length < 2 && outcome.good.length > 0 && outcome.bad.length > 0) {
    const counts = profile.mostFrequent.map(({ value, count }) => `${JSON.stringify(value)} ${thin(count)}×`).join(', ');
    say('one-class', `The outcome has one class only: ${counts}. A fit needs goods and bads.`, {
      section,
      column: profile.column,
    });
  }
  // With a decision the rows that it declines need no outcome: only the rows themselves can tell.
  if (draft.declined) return;
  for (const { value, count } of [...profile.mostFrequent, ...profile.missingTokens]) {
    if (mapped.includes(value)) continue;
    const what = value === '' ? 'empty' : JSON.stringify(value);
    say(
      'outcome-unmapped',
      `The outcome is ${what} in ${thin(count)} rows: say whether that is good, bad, indeterminate or excluded.`,
      { section, value, count },
    );
  }
}

/** The columns of a rule hold numbers, and are known after the decision only: none of them can be a characteristic. */
function checkRuleOfOutcome(
  draft: DraftContent,
  { bad, indeterminate, monthsOnBook }: DraftOutcomeRule,
  days: DefinedColumn,
  profiles: ReadonlyMap<string, ColumnProfile>,
  say: Say,
): void {
  const section = 'outcome';
  if (indeterminate !== null && indeterminate >= bad)
    say('rule-order', `Indeterminate begins at ${indeterminate} days and bad at ${bad}: indeterminate has to begin earlier.`, {
      section,
    });
  const numeric = (column: string, what: string): void => {
    const profile = profiles.get(column);
    if (!profile) say('no-such-column', `The file has no column ${column}.`, { section, column });
    else if (profile.kind !== 'numeric')
      say('not-numeric', `${column} holds no numbers as the file was read, and ${what} are numbers.`, { section, column });
  };
  numeric(days.column, 'days past due');
  if (monthsOnBook === null) return;
  const { column } = monthsOnBook;
  numeric(column, 'months on book');
  if (column === days.column) say('rule-columns', `${column} cannot hold days past due and months on book.`, { section, column });
  else if (draft.columns.some((entry) => entry.column === column && entry.role === 'characteristic'))
    say('leaks', `${column} is part of the outcome and cannot also be a characteristic: set it to not used.`, {
      section,
      column,
    });
}

function partitionOf(
  draft: DraftContent,
  holder: (role: ColumnRole) => DefinedColumn | undefined,
  groupsBy: { readonly groupsBy?: GroupsBy },
  say: Say,
): Partition | null {
  const { partition } = draft;
  const section = 'partition';
  if (partition.by === 'column') {
    const column = holder('partition');
    if (!column)
      say('no-partition-column', 'No column has the role of the partition. Give it to one, or draw hold-out by a seed.', {
        section,
      });
    if (partition.development.length === 0) say('no-development', 'No value of the partition means development.', { section });
    const all = [...partition.development, ...partition.holdOut, ...partition.outOfTime];
    for (const value of new Set(all.filter((one, place) => all.indexOf(one) !== place))) {
      say('value-twice', `The partition ${JSON.stringify(value)} means two things at once.`, { section, value });
    }
    if (!column) return null;
    return {
      column: column.column,
      development: partition.development,
      holdOut: partition.holdOut,
      outOfTime: partition.outOfTime,
    };
  }
  const { seed, holdOutShare, outOfTime } = partition;
  const group = holder('group key');
  const groups = group && { groups: group.column, ...groupsBy };
  if (!outOfTime) return { seed, holdOutShare, ...groups, outOfTime: null };
  const date = holder('application date');
  if (!date)
    say('no-application-date', 'Out-of-time is taken by date, and no column has the role of the application date.', { section });
  if (outOfTime.from === null && outOfTime.to === null) say('no-period', 'Out-of-time needs a first or a last day.', { section });
  if (outOfTime.from !== null && outOfTime.to !== null && outOfTime.from > outOfTime.to)
    say('empty-period', 'Out-of-time ends before it begins.', { section });
  return date ? { seed, holdOutShare, ...groups, outOfTime: { column: date.column, ...outOfTime } } : null;
}
