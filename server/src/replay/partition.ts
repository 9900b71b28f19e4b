import type { PartitionByColumn, PartitionBySeed, Specification } from '@tallystone/contracts/specification/types';
import { isoDay, type Columns } from './columns';
import { orderOfGroups } from './groups';
import { orderByKey } from './order';
import { ValueCounts, type ReplayProblem } from './problems';
import { BAD, DEVELOPMENT, GOOD, HOLD_OUT, NO_OUTCOME, OUT, OUT_OF_TIME } from './types';

/**
 * Splits the rows that have an outcome (goods, bads, indeterminates, declined) into development, hold-out and out-of-time.
 * By seed, indeterminate and declined rows that are not out-of-time stay in development: only goods and bads are drawn, or whole groups.
 */
export function assignPartition(
  spec: Specification,
  columns: Columns,
  outcome: Uint8Array,
  problems: ReplayProblem[],
): Uint8Array {
  const { partition } = spec;
  return 'column' in partition ? byColumn(partition, columns, outcome, problems) : bySeed(partition, columns, outcome, problems);
}

function byColumn(partition: PartitionByColumn, columns: Columns, outcome: Uint8Array, problems: ReplayProblem[]): Uint8Array {
  const assigned = new Uint8Array(columns.rows);
  const column = columns.text(partition.column);
  if (column === null) return assigned;
  const place = new Map<string, number>([
    ...partition.development.map((text) => [text, DEVELOPMENT] as const),
    ...partition.holdOut.map((text) => [text, HOLD_OUT] as const),
    ...partition.outOfTime.map((text) => [text, OUT_OF_TIME] as const),
  ]);
  const { codes, texts } = column;
  const byText = Uint8Array.from(texts, (text) => place.get(text) ?? OUT);
  const faults = new ValueCounts();
  for (let row = 0; row < assigned.length; row++) {
    if (outcome[row] === NO_OUTCOME) continue;
    assigned[row] = byText[codes[row]];
    if (assigned[row] === OUT) faults.add(texts[codes[row]]);
  }
  const problem = faults.problem(
    'unlisted-partition',
    partition.column,
    (listed, rows) => `${rows} row${rows === 1 ? ' is' : 's are'} in no partition: ${listed}. Say which part each value means, or exclude these rows.`,
  );
  if (problem !== null) problems.push(problem);
  return assigned;
}

function bySeed(partition: PartitionBySeed, columns: Columns, outcome: Uint8Array, problems: ReplayProblem[]): Uint8Array {
  const assigned = new Uint8Array(columns.rows);
  const isOutOfTime = partition.outOfTime === null ? null : outOfTime(partition.outOfTime, columns, outcome, problems);
  const drawn: Record<number, number[]> = { [GOOD]: [], [BAD]: [] };
  for (let row = 0; row < assigned.length; row++) {
    if (outcome[row] === NO_OUTCOME) continue;
    assigned[row] = isOutOfTime?.(row) === true ? OUT_OF_TIME : DEVELOPMENT;
    if (assigned[row] === DEVELOPMENT) drawn[outcome[row]]?.push(row);
  }
  if (partition.groups !== undefined) {
    drawGroups(partition, partition.groups, columns, outcome, assigned, problems);
    return assigned;
  }
  for (const rows of [drawn[GOOD], drawn[BAD]]) {
    const order = orderByKey(rows.length, (index) => `${partition.seed}:${rows[index] + 1}`);
    const count = Math.round(partition.holdOutShare * rows.length);
    for (let place = 0; place < count; place++) assigned[rows[order[place]]] = HOLD_OUT;
  }
  return assigned;
}

/**
 * Whole groups become hold-out, in the order of SHA-256 of `seed:value` (or `seed:first row`), as long as hold-out has fewer goods and bads than its share of them. Whoever is in
 * such a group goes with it, the indeterminate and the declined too; out-of-time stays what its date makes it.
 */
function drawGroups(
  { seed, holdOutShare, groupsBy }: PartitionBySeed,
  name: string,
  columns: Columns,
  outcome: Uint8Array,
  assigned: Uint8Array,
  problems: ReplayProblem[],
): void {
  const column = columns.text(name);
  if (column === null) return;
  const { codes, texts } = column;
  const known = new Float64Array(texts.length);
  const present = new Set<number>();
  const faults = new ValueCounts();
  let total = 0;
  for (let row = 0; row < assigned.length; row++) {
    if (assigned[row] !== DEVELOPMENT) continue;
    const code = codes[row];
    if (columns.isMissing(texts[code])) faults.add(texts[code]);
    present.add(code);
    if (outcome[row] !== GOOD && outcome[row] !== BAD) continue;
    known[code]++;
    total++;
  }
  const problem = faults.problem('missing-group', name, (listed, rows) => `${rows} row${rows === 1 ? ' has' : 's have'} no group in "${name}": ${listed}.`);
  if (problem !== null) problems.push(problem);
  const { groups, nameOf } = orderOfGroups(present, column, groupsBy);
  const wanted = Math.round(holdOutShare * total);
  const held = new Set<number>();
  let taken = 0;
  for (const index of orderByKey(groups.length, (place) => `${seed}:${nameOf(groups[place])}`)) {
    if (taken >= wanted) break;
    held.add(groups[index]);
    taken += known[groups[index]];
  }
  for (let row = 0; row < assigned.length; row++) if (assigned[row] === DEVELOPMENT && held.has(codes[row])) assigned[row] = HOLD_OUT;
}

function outOfTime(
  period: NonNullable<PartitionBySeed['outOfTime']>,
  columns: Columns,
  outcome: Uint8Array,
  problems: ReplayProblem[],
): ((row: number) => boolean) | null {
  const column = columns.text(period.column);
  if (column === null) return null;
  const { codes, texts } = column;
  const days = texts.map(isoDay);
  const faults = new ValueCounts();
  for (let row = 0; row < codes.length; row++)
    if (outcome[row] !== NO_OUTCOME && days[codes[row]] === null) faults.add(texts[codes[row]]);
  const problem = faults.problem(
    'not-a-date',
    period.column,
    (listed, rows) => `${rows} row${rows === 1 ? ' has no' : 's have no'} ISO date in "${period.column}": ${listed}.`,
  );
  if (problem !== null) problems.push(problem);
  const { from, to } = period;
  const within = Uint8Array.from(days, (day) =>
    day !== null && (from === null || day >= from) && (to === null || day <= to) ? 1 : 0,
  );
  return (row) => within[codes[row]] === 1;
}
