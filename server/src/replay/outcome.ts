import type { Specification } from '@tallystone/contracts/specification/types';
import type { Columns } from './columns';
import { ValueCounts, type ReplayProblem } from './problems';
import { BAD, DECLINED, GOOD, INDETERMINATE, NO_OUTCOME } from './types';

const EXCLUDED = 254;
const UNLISTED = 253;

export interface Outcomes {
  /** Per row: GOOD, BAD, INDETERMINATE, DECLINED or NO_OUTCOME. */
  outcome: Uint8Array;
  /** Per row 1 if the outcome column, read by itself, says bad: what an exclusion's number of bads counts. */
  saysBad: Uint8Array;
}

/**
 * Gives every row that is left its outcome, compared as text. A declined row has no outcome, whatever its column says. Rows whose value is
 * listed as excluded are marked in `exclusion` with the number after the last rule. Unlisted and empty values are problems, all at once.
 */
export function assignOutcome(
  spec: Specification,
  columns: Columns,
  exclusion: Uint16Array,
  problems: ReplayProblem[],
): Outcomes {
  const { rows } = columns;
  const outcome = new Uint8Array(rows).fill(NO_OUTCOME);
  const saysBad = new Uint8Array(rows);
  const column = columns.text(spec.outcome.column);
  const declined = declinedRows(spec, columns);
  if (column === null) return { outcome, saysBad };
  const meaning = new Map<string, number>([
    ...spec.outcome.good.map((text) => [text, GOOD] as const),
    ...spec.outcome.bad.map((text) => [text, BAD] as const),
    ...spec.outcome.indeterminate.map((text) => [text, INDETERMINATE] as const),
    ...spec.outcome.excluded.map((text) => [text, EXCLUDED] as const),
  ]);
  const { codes, texts } = column;
  const byText = Uint8Array.from(texts, (text) => meaning.get(text) ?? UNLISTED);
  const faults = new ValueCounts();
  const goneByOutcome = spec.exclusions.length + 1;
  for (let row = 0; row < rows; row++) {
    const found = byText[codes[row]];
    if (found === BAD) saysBad[row] = 1;
    if (exclusion[row] !== 0) continue;
    if (declined?.(row) === true) outcome[row] = DECLINED;
    else if (found === EXCLUDED) exclusion[row] = goneByOutcome;
    else if (found === UNLISTED) faults.add(texts[codes[row]]);
    else outcome[row] = found;
  }
  const problem = faults.problem(
    'unlisted-outcome',
    spec.outcome.column,
    (listed, total) =>
      `${total} row${total === 1 ? ' has an outcome that is' : 's have outcomes that are'} neither good, bad, indeterminate nor excluded: ${listed}.`,
  );
  if (problem !== null) problems.push(problem);
  return { outcome, saysBad };
}

function declinedRows(spec: Specification, columns: Columns): ((row: number) => boolean) | null {
  if (spec.declined === null) return null;
  const column = columns.text(spec.declined.column);
  if (column === null) return null;
  const values = new Set(spec.declined.values);
  const byText = Uint8Array.from(column.texts, (text) => (values.has(text) ? 1 : 0));
  return (row) => byText[column.codes[row]] === 1;
}
