import { requireFinite } from '../checks';
import { classNumeric, type Constraints } from './classing';

export interface CategoryCounts {
  readonly goods: number;
  readonly bads: number;
  readonly rows: number;
  /** Several rare categories that were pooled already. */
  readonly pooled?: boolean;
}

/** Where there are more categories than this and one more, the rest, by rows, is pooled: a code of a bin fits in a byte. */
export const mostApart = 239;

/** A category with less than this part of the smallest share of a bin is too rare for a rate of its own. */
const RARE_PART = 0.2;

/**
 * Groups categories: ordered by bad rate (lowest first), then merged along that order into what is best by the criterion under the constraints: exact
 * among groups that are stretches of the order. For a two-valued outcome no other grouping is better, unless a smallest share or count forbids the best
 * one: then another may gain a little, with groups that overlap in risk, and is not sought. Rare categories (below a fifth of the smallest share, or
 * without a good or a bad, or beyond the 239 most frequent of more than 240) are pooled and take their place by the rate of the pool.
 * @param categories weighted goods and bads, and rows, of each category
 * @param constraints what every group has to satisfy; its trend is not used
 * @param totals goods and bads of the whole characteristic; default: those of the categories
 * @throws NumericError for NaN (names the category) and what `classNumeric` refuses
 * @returns numbers of categories by group, lowest bad rate first; within a group in the order given
 * @example classCategories([{ goods: 90, bads: 10, rows: 100 }, { goods: 50, bads: 50, rows: 100 }], constraints).groups // [[0], [1]]
 * Source: L. Breiman et al., Classification and Regression Trees, 1984, theorem 4.5 (from memory); W. D. Fisher, JASA 53, 1958.
 */
export function classCategories(
  categories: readonly CategoryCounts[],
  constraints: Constraints,
  totals?: { goods: number; bads: number },
): { groups: number[][]; informationValue: number } {
  categories.forEach(({ goods, bads, rows }, i) => requireFinite(`category ${i}`, [goods, bads, rows]));
  if (categories.length === 0) return { groups: [], informationValue: 0 };
  const allRows = categories.reduce((sum, { rows }) => sum + rows, 0);
  const apart = categories.length > mostApart + 1 ? mostFrequent(categories) : null;
  const isRare = ({ goods, bads, rows, pooled }: CategoryCounts, i: number): boolean =>
    pooled === true || apart?.has(i) === false || goods === 0 || bads === 0 || rows < RARE_PART * constraints.smallestShare * allRows;
  const rare = categories.flatMap((category, i) => (isRare(category, i) ? [i] : []));
  const units: number[][] = categories.flatMap((category, i) => (isRare(category, i) ? [] : [[i]]));
  if (rare.length > 0) units.push(rare);
  const counted = units.map((members) => ({
    members,
    goods: sum(members, (i) => categories[i].goods),
    bads: sum(members, (i) => categories[i].bads),
    rows: sum(members, (i) => categories[i].rows),
  }));
  const rate = ({ goods, bads }: { goods: number; bads: number }): number => (goods + bads > 0 ? bads / (goods + bads) : 0);
  counted.sort((a, b) => rate(a) - rate(b) || a.members[0] - b.members[0]);
  const fine = {
    goods: counted.map(({ goods }) => goods),
    bads: counted.map(({ bads }) => bads),
    rows: counted.map(({ rows }) => rows),
  };
  // The order is by rate already, so a trend over it has no meaning of its own.
  const { cuts, informationValue } = classNumeric(fine, { ...constraints, trend: 'any' }, totals);
  const ends = [...cuts, counted.length];
  const groups = ends.map((end, g) =>
    counted
      .slice(g === 0 ? 0 : ends[g - 1], end)
      .flatMap(({ members }) => members)
      .sort((a, b) => a - b),
  );
  return { groups, informationValue };
}

/** Places of the categories with the most rows; of equally many the earlier ones. */
function mostFrequent(categories: readonly CategoryCounts[]): ReadonlySet<number> {
  const byRows = categories.map((_, i) => i).sort((a, b) => categories[b].rows - categories[a].rows || a - b);
  return new Set(byRows.slice(0, mostApart));
}

function sum(list: readonly number[], of: (i: number) => number): number {
  return list.reduce((total, i) => total + of(i), 0);
}
