import { isByRule } from '@tallystone/contracts/specification/outcome';
import type { OutcomeByRule, OutcomeByValues, OutcomeDefinition, Specification } from '@tallystone/contracts/specification/types';
import type { Columns } from './columns';
import { ValueCounts, type ReplayProblem } from './problems';
import { BAD, DECLINED, GOOD, INDETERMINATE, NO_OUTCOME } from './types';

/** What the outcome says of a row, besides GOOD, BAD and INDETERMINATE. */
export const EXCLUDED = 254;
/** Excluded for want of months on book. */
export const TOO_FEW_MONTHS = 253;
const FAULTY = 252;

export interface Outcomes {
  /** Per row: GOOD, BAD, INDETERMINATE, DECLINED or NO_OUTCOME. */
  outcome: Uint8Array;
  /** Per row 1 if the outcome, read by itself, says bad: what an exclusion's number of bads counts. */
  saysBad: Uint8Array;
}

/** Reads the outcome of one row from its own columns, whatever else is known of it. */
export interface OutcomeReader {
  /** GOOD, BAD, INDETERMINATE, EXCLUDED, TOO_FEW_MONTHS, or something else where it says none of these. */
  says(row: number): number;
  /** Called for a row that needs an outcome and has none. */
  fault(row: number): void;
  problems(): ReplayProblem[];
}

/** Null where the file lacks a column, which `columns` reports. */
export const outcomeReader = (outcome: OutcomeDefinition, columns: Columns): OutcomeReader | null =>
  isByRule(outcome) ? byRule(outcome, columns) : byValues(outcome, columns);

function byValues(definition: OutcomeByValues, columns: Columns): OutcomeReader | null {
  const column = columns.text(definition.column);
  if (column === null) return null;
  const meaning = new Map<string, number>([
    ...definition.good.map((text) => [text, GOOD] as const),
    ...definition.bad.map((text) => [text, BAD] as const),
    ...definition.indeterminate.map((text) => [text, INDETERMINATE] as const),
    ...definition.excluded.map((text) => [text, EXCLUDED] as const),
  ]);
  const { codes, texts } = column;
  const byText = Uint8Array.from(texts, (text) => meaning.get(text) ?? FAULTY);
  const faults = new ValueCounts();
  return {
    says: (row) => byText[codes[row]],
    fault: (row) => faults.add(texts[codes[row]]),
    problems: () => given(
      faults.problem(
        'unlisted-outcome',
        definition.column,
        (listed, total) =>
          `${total} row${total === 1 ? ' has an outcome that is' : 's have outcomes that are'} neither good, bad, indeterminate nor excluded: ${listed}.`,
      ),
    ),
  };
}

/** Months on book first, then days past due. A number below zero is no count of days or months: likely a code, and never taken for good. */
function byRule({ daysPastDue, monthsOnBook }: OutcomeByRule, columns: Columns): OutcomeReader | null {
  const days = columns.numbers(daysPastDue.column);
  const months = monthsOnBook === null ? null : columns.numbers(monthsOnBook.column);
  if (days === null || (monthsOnBook !== null && months === null)) return null;
  const whereMissing = daysPastDue.missing === 'excluded' ? EXCLUDED : FAULTY;
  const ofDays = (row: number): number => {
    if (days.missing(row)) return whereMissing;
    const value = days.number(row);
    if (!(value >= 0)) return FAULTY;
    if (value >= daysPastDue.bad) return BAD;
    return daysPastDue.indeterminate !== null && value >= daysPastDue.indeterminate ? INDETERMINATE : GOOD;
  };
  const ofMonths = (row: number): number | null => {
    if (months === null || monthsOnBook === null) return null;
    if (months.missing(row)) return whereMissing;
    const value = months.number(row);
    if (!(value >= 0)) return FAULTY;
    return value < monthsOnBook.least ? TOO_FEW_MONTHS : null;
  };
  const faultyDays = new ValueCounts();
  const faultyMonths = new ValueCounts();
  const complaint = (what: string) => (listed: string, total: number) =>
    `${total} row${total === 1 ? ' has' : 's have'} ${what} that are not a number of at least 0: ${listed}.`;
  return {
    says: (row) => ofMonths(row) ?? ofDays(row),
    fault(row) {
      if (ofMonths(row) === FAULTY) faultyMonths.add(months?.text(row) ?? '');
      else faultyDays.add(days.text(row));
    },
    problems: () => [
      ...given(faultyDays.problem('no-days-past-due', daysPastDue.column, complaint('days past due'))),
      ...given(faultyMonths.problem('no-months-on-book', monthsOnBook?.column ?? '', complaint('months on book'))),
    ],
  };
}

const given = (problem: ReplayProblem | null): ReplayProblem[] => (problem === null ? [] : [problem]);

/**
 * Gives every row that is left its outcome. A declined row has none, whatever its columns say. Rows that the outcome excludes are marked in
 * `exclusion` with the number after the last rule. Values that say nothing are problems, all at once.
 */
export function assignOutcome(
  spec: Pick<Specification, 'exclusions' | 'outcome' | 'declined'>,
  columns: Columns,
  exclusion: Uint16Array,
  problems: ReplayProblem[],
): Outcomes {
  const { rows } = columns;
  const outcome = new Uint8Array(rows).fill(NO_OUTCOME);
  const saysBad = new Uint8Array(rows);
  const reader = outcomeReader(spec.outcome, columns);
  const declined = declinedRows(spec, columns);
  if (reader === null) return { outcome, saysBad };
  const goneByOutcome = spec.exclusions.length + 1;
  for (let row = 0; row < rows; row++) {
    const found = reader.says(row);
    if (found === BAD) saysBad[row] = 1;
    if (exclusion[row] !== 0) continue;
    if (declined?.(row) === true) outcome[row] = DECLINED;
    else if (found === EXCLUDED || found === TOO_FEW_MONTHS) exclusion[row] = goneByOutcome;
    else if (found === FAULTY) reader.fault(row);
    else outcome[row] = found;
  }
  problems.push(...reader.problems());
  return { outcome, saysBad };
}

function declinedRows(spec: Pick<Specification, 'declined'>, columns: Columns): ((row: number) => boolean) | null {
  if (spec.declined === null) return null;
  const column = columns.text(spec.declined.column);
  if (column === null) return null;
  const values = new Set(spec.declined.values);
  const byText = Uint8Array.from(column.texts, (text) => (values.has(text) ? 1 : 0));
  return (row) => byText[column.codes[row]] === 1;
}
