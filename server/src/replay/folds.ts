import type { Folds, GroupsBy } from '@tallystone/contracts/specification/types';
import type { Columns } from './columns';
import { orderOfGroups } from './groups';
import { orderByKey } from './order';
import { ValueCounts, type ReplayProblem } from './problems';
import { BAD, DEVELOPMENT, GOOD } from './types';

/**
 * Folds 1 to K of the goods and bads of development; 0 for every other row.
 *
 * Seeded: goods then bads, each in the order of SHA-256 of `seed:fold:row` ("fold" as written); place p goes to fold p mod K + 1.
 * Grouped: groups in the order of SHA-256 of `seed:fold:value` (or `seed:fold:first row`), each to the fold with the smallest weight so far.
 * By column: its distinct values in ascending order (as numbers if all are numbers) are folds 1, 2, ...
 */
export function assignFolds(
  folds: Folds,
  columns: Columns,
  outcome: Uint8Array,
  partition: Uint8Array,
  weights: Float64Array | null,
  problems: ReplayProblem[],
): { folds: Uint8Array; count: number } {
  const assigned = new Uint8Array(columns.rows);
  const goods: number[] = [];
  const bads: number[] = [];
  for (let row = 0; row < assigned.length; row++) {
    if (partition[row] !== DEVELOPMENT) continue;
    if (outcome[row] === GOOD) goods.push(row);
    else if (outcome[row] === BAD) bads.push(row);
  }
  if ('column' in folds)
    return { folds: assigned, count: byColumn(folds.column, columns, [...goods, ...bads], assigned, problems) };
  if (folds.groups !== null) byGroup(folds, folds.groups, columns, [...goods, ...bads], weights, assigned, problems);
  else {
    for (const rows of [goods, bads]) {
      const order = orderByKey(rows.length, (index) => `${folds.seed}:fold:${rows[index] + 1}`);
      order.forEach((index, place) => (assigned[rows[index]] = (place % folds.count) + 1));
    }
  }
  return { folds: assigned, count: folds.count };
}

function byGroup(
  folds: { count: number; seed: number; groupsBy?: GroupsBy | undefined },
  name: string,
  columns: Columns,
  rows: readonly number[],
  weights: Float64Array | null,
  assigned: Uint8Array,
  problems: ReplayProblem[],
): void {
  const column = columns.text(name);
  if (column === null) return;
  const { codes, texts } = column;
  const weightOf = new Map<number, number>();
  const faults = new ValueCounts();
  for (const row of rows) {
    if (columns.isMissing(texts[codes[row]])) faults.add(texts[codes[row]]);
    weightOf.set(codes[row], (weightOf.get(codes[row]) ?? 0) + (weights === null ? 1 : weights[row]));
  }
  const problem = faults.problem(
    'missing-group',
    name,
    (listed, count) => `${count} rows have no group in "${name}": ${listed}.`,
  );
  if (problem !== null) problems.push(problem);
  const { groups, nameOf } = orderOfGroups(weightOf.keys(), column, folds.groupsBy);
  if (groups.length < folds.count) {
    const message = `"${name}" has ${groups.length} groups in development, fewer than the ${folds.count} folds.`;
    problems.push({ code: 'too-few-groups', message, where: { column: name, count: groups.length } });
  }
  const load = new Float64Array(folds.count);
  const foldOf = new Map<number, number>();
  for (const index of orderByKey(groups.length, (place) => `${folds.seed}:fold:${nameOf(groups[place])}`)) {
    let lightest = 0;
    for (let fold = 1; fold < folds.count; fold++) if (load[fold] < load[lightest]) lightest = fold;
    load[lightest] += weightOf.get(groups[index]) ?? 0;
    foldOf.set(groups[index], lightest + 1);
  }
  for (const row of rows) assigned[row] = foldOf.get(codes[row]) ?? 0;
}

const MOST_FOLDS = 250;

function byColumn(
  name: string,
  columns: Columns,
  rows: readonly number[],
  assigned: Uint8Array,
  problems: ReplayProblem[],
): number {
  const column = columns.text(name);
  if (column === null) return 0;
  const { codes, texts } = column;
  const faults = new ValueCounts();
  const used = new Set<number>();
  for (const row of rows) {
    if (columns.isMissing(texts[codes[row]])) faults.add(texts[codes[row]]);
    else used.add(codes[row]);
  }
  const problem = faults.problem('missing-fold', name, (listed, count) => `${count} rows have no fold in "${name}": ${listed}.`);
  if (problem !== null) problems.push(problem);
  if (used.size < 2 || used.size > MOST_FOLDS) {
    const message = `"${name}" has ${used.size} different values in development; 2 to ${MOST_FOLDS} folds are possible.`;
    problems.push({ code: 'fold-count', message, where: { column: name, count: used.size } });
    return 0;
  }
  const values = [...used];
  const numeric = values.every((code) => Number.isFinite(Number(texts[code])));
  values.sort((a, b) => (numeric ? Number(texts[a]) - Number(texts[b]) : 0) || (texts[a] < texts[b] ? -1 : 1));
  const foldOf = new Map(values.map((code, index) => [code, index + 1]));
  for (const row of rows) assigned[row] = foldOf.get(codes[row]) ?? 0;
  return values.length;
}
