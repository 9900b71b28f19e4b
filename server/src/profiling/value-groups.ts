/**
 * How the values of a column are grouped where columns are compared, in the quality report and in the balance of a partition: numbers into about ten by
 * cuts that are values themselves, texts into the most frequent and all others. Where the cuts lie differs: the report looks at rows of the file and
 * gives each of a few values a group, the balance counts rows of development by distinct value.
 */

/** Groups of about equal size: common practice for a stability index. */
export const groupsOfNumbers = 10;
/** Texts with a group of their own; one more for all others. */
export const groupsOfTexts = 19;
export const allOthers = 'all others';

/**
 * The group of a value, of as many as there are edges and one; an edge belongs to the group above it.
 * @example placeAmong([10, 20], 10) // 1
 */
export function placeAmong(edges: readonly number[], value: number): number {
  let place = 0;
  while (place < edges.length && value >= edges[place]) place++;
  return place;
}

/**
 * The codes with a group of their own, the most frequent first; equals in the order of their texts, so that they do not depend on the order of rows.
 * @example mostFrequent([0, 1, 2], [5, 9, 5], ['b', 'a', 'a']) // [1, 2, 0]
 */
export const mostFrequent = (codes: readonly number[], counts: ArrayLike<number>, texts: readonly string[]): number[] =>
  [...codes].sort((a, b) => counts[b] - counts[a] || (texts[a] < texts[b] ? -1 : 1)).slice(0, groupsOfTexts);
