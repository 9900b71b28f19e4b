import type { ColumnTest, Exclusion, RowTest } from '@tallystone/contracts/specification/types';
import { isoDay, type Columns } from './columns';
import { ValueCounts, type ReplayProblem } from './problems';

type Test = (row: number) => boolean;

/**
 * Which rule takes each row out: 0 = none, k = rule k (from 1); the first rule that matches wins.
 * Values that a limit cannot be compared with (not a number, not a date) are problems.
 */
export function applyExclusions(exclusions: readonly Exclusion[], columns: Columns, problems: ReplayProblem[]): Uint16Array {
  const taken = new Uint16Array(columns.rows);
  exclusions.forEach((rule, index) => {
    const test = compile(rule, columns, problems);
    for (let row = 0; row < taken.length; row++) if (taken[row] === 0 && test(row)) taken[row] = index + 1;
  });
  return taken;
}

function compile(rule: RowTest, columns: Columns, problems: ReplayProblem[]): Test {
  if ('all' in rule) {
    const tests = rule.all.map((inner) => compile(inner, columns, problems));
    return (row) => tests.every((test) => test(row));
  }
  if ('any' in rule) {
    const tests = rule.any.map((inner) => compile(inner, columns, problems));
    return (row) => tests.some((test) => test(row));
  }
  return compileColumn(rule, columns, problems);
}

function compileColumn(rule: ColumnTest, columns: Columns, problems: ReplayProblem[]): Test {
  const column = columns.text(rule.column);
  if (column === null) return () => false;
  const { codes, texts } = column;
  const limits = limitTest(rule, columns, problems);
  // One answer per distinct text, then a look-up per row.
  const members = rule.in === undefined ? null : new Set(rule.in);
  const strangers = rule.notIn === undefined ? null : new Set(rule.notIn);
  const byText = Uint8Array.from(texts, (text) => {
    const missing = columns.isMissing(text);
    if (rule.missing !== undefined && rule.missing !== missing) return 0;
    if (missing) return rule.missing === true && members === null && strangers === null && limits === null ? 1 : 0;
    if (members !== null && !members.has(text)) return 0;
    return strangers !== null && strangers.has(text) ? 0 : 1;
  });
  return (row) => byText[codes[row]] === 1 && (limits === null || limits(row));
}

function limitTest(rule: ColumnTest, columns: Columns, problems: ReplayProblem[]): Test | null {
  const { below, atMost, above, atLeast } = rule;
  const stated = [below, atMost, above, atLeast].filter((limit) => limit !== undefined);
  if (stated.length === 0) return null;
  const within = <Value extends number | string>(value: Value): boolean =>
    (below === undefined || value < below) &&
    (atMost === undefined || value <= atMost) &&
    (above === undefined || value > above) &&
    (atLeast === undefined || value >= atLeast);
  const faults = new ValueCounts();
  let test: Test;
  if (typeof stated[0] === 'string') {
    const column = columns.text(rule.column);
    if (column === null) return () => false;
    const { codes, texts } = column;
    const days = texts.map((text) => (columns.isMissing(text) ? null : isoDay(text)));
    for (const code of codes) if (days[code] === null && !columns.isMissing(texts[code])) faults.add(texts[code]);
    test = (row) => {
      const day = days[codes[row]];
      return day !== null && within(day);
    };
  } else {
    const view = columns.numbers(rule.column);
    if (view === null) return () => false;
    for (let row = 0; row < columns.rows; row++)
      if (Number.isNaN(view.number(row)) && !view.missing(row)) faults.add(view.text(row));
    test = (row) => {
      const value = view.number(row);
      return !Number.isNaN(value) && within(value);
    };
  }
  const what = typeof stated[0] === 'string' ? 'an ISO date' : 'a number';
  const problem = faults.problem(
    'not-comparable',
    rule.column,
    (listed) => `"${rule.column}" has values that are not ${what}: ${listed}.`,
  );
  if (problem !== null) problems.push(problem);
  return test;
}
