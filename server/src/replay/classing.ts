import {
  binOf,
  chooseTrend,
  classCategories,
  classNumeric,
  fineEdges,
  type Constraints,
  type TrendCounts,
} from '@tallystone/numeric';
import type { AutomaticClassing } from '@tallystone/contracts/specification/types';

/** Automatic classing of one characteristic from rows in memory: what a fold repeats on its training rows. */

/**
 * Cuts of a numeric characteristic.
 * @param values NaN where special or missing: such rows count in the totals of goods and bads only
 * @param outcome 1 good, 0 bad
 * @param uses entries to use (1 = yes), null = all
 * @returns edges, strictly ascending; none if no two bins satisfy the constraints
 */
export function automaticEdges(
  values: Float64Array,
  outcome: Uint8Array,
  weights: Float64Array | null,
  settings: AutomaticClassing,
  closed: 'left' | 'right',
  uses: Uint8Array | null = null,
): number[] {
  const known = values.filter((value, index) => !Number.isNaN(value) && (uses === null || uses[index] === 1));
  if (known.length === 0) return [];
  const edges = fineEdges(known, settings.fineClasses);
  const rows = new Float64Array(edges.length + 1);
  const goods = new Float64Array(edges.length + 1);
  const bads = new Float64Array(edges.length + 1);
  const badRows = new Float64Array(edges.length + 1);
  const totals = { goods: 0, bads: 0 };
  for (let index = 0; index < values.length; index++) {
    if (uses !== null && uses[index] === 0) continue;
    const weight = weights === null ? 1 : weights[index];
    const good = outcome[index] === 1;
    if (good) totals.goods += weight;
    else totals.bads += weight;
    if (Number.isNaN(values[index])) continue;
    const fine = binOf(values[index], edges, closed);
    rows[fine]++;
    if (!good) badRows[fine]++;
    (good ? goods : bads)[fine] += weight;
  }
  const classes = { goods, bads, rows, badRows };
  const constraints = constraintsOf(settings);
  // What was chosen by cross-validation is chosen again here: a fold that kept the trend of all rows would know more than it may.
  const trend = settings.trendBy === 'cross-validation' ? crossValidatedTrend(classes, constraints, totals) : constraints.trend;
  // A cut before fine class i is the edge between i - 1 and i.
  return classNumeric(classes, { ...constraints, trend }, totals).cuts.map((cut) => edges[cut - 1]);
}

/** The trend with the smallest cross-validated deviance. Folds and seed are fixed, so that the same counts have the same trend everywhere. */
export function crossValidatedTrend(
  known: TrendCounts,
  constraints: Constraints,
  totals: { goods: number; bads: number },
): Constraints['trend'] {
  return chooseTrend(known, { ...constraints, trend: 'any' }, { folds: 5, seed: 1, totals }).trend;
}

/**
 * Groups of a categorical characteristic.
 * @param categories category of each entry, -1 where special or missing; `count` categories in all
 * @returns the group of each category, -1 if it has no rows here
 */
export function automaticGroups(
  categories: Int32Array,
  count: number,
  outcome: Uint8Array,
  weights: Float64Array | null,
  settings: AutomaticClassing,
  uses: Uint8Array | null = null,
): { groupOf: Int32Array; groups: number } {
  const counted = Array.from({ length: count }, () => ({ goods: 0, bads: 0, rows: 0 }));
  const totals = { goods: 0, bads: 0 };
  for (let index = 0; index < categories.length; index++) {
    if (uses !== null && uses[index] === 0) continue;
    const weight = weights === null ? 1 : weights[index];
    const side = outcome[index] === 1 ? 'goods' : 'bads';
    totals[side] += weight;
    if (categories[index] < 0) continue;
    counted[categories[index]].rows++;
    counted[categories[index]][side] += weight;
  }
  const present = counted.flatMap((category, index) => (category.rows > 0 ? [index] : []));
  const groupOf = new Int32Array(count).fill(-1);
  const { groups } = classCategories(
    present.map((index) => counted[index]),
    constraintsOf(settings),
    totals,
  );
  groups.forEach((members, group) => members.forEach((member) => (groupOf[present[member]] = group)));
  return { groupOf, groups: groups.length };
}

function constraintsOf(settings: AutomaticClassing): Constraints {
  const { smallestShare, smallestGoods, smallestBads, mostBins, smallestDifference, trend, criterion } = settings;
  return { smallestShare, smallestGoods, smallestBads, mostBins, smallestDifference, trend, criterion };
}
