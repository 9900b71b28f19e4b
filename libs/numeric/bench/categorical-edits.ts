import { type SplitWish, bestSplit } from './best-split';
import { type EditOf, smallWords } from './numeric-edits';
import type { CategoricalBins, FineClasses, Place } from './types';

/** Manual edits of a categorical characteristic. Groups stay in order of risk, lowest bad rate first. */

/** Development's smoothed bad rate of a set of categories: small ones are ordered too. */
export function badRateOf(fine: FineClasses, categories: readonly string[]): number {
  let goods = 0.5;
  let bads = 0.5;
  for (const category of categories) {
    const slot = fine.categories.indexOf(category);
    if (slot < 0) continue;
    goods += fine.development.goods[slot];
    bads += fine.development.bads[slot];
  }
  return bads / (goods + bads);
}

/** Places (from 0) of groups, lowest bad rate first; ties in the order they stand. */
export function riskOrder(fine: FineClasses, groups: readonly (readonly string[])[]): number[] {
  const rates = groups.map((group) => badRateOf(fine, group));
  return groups.map((_, index) => index).sort((a, b) => rates[a] - rates[b] || a - b);
}

/** Moves categories into an existing group, or into a new one of their own. */
export function groupCategories(
  fine: FineClasses,
  bins: CategoricalBins,
  categories: readonly string[],
  target: number | 'new',
): EditOf<CategoricalBins> | null {
  const moved = new Set(categories);
  const known = bins.groups.flat().filter((category) => moved.has(category));
  if (known.length === 0) return null;
  if (target === 'new' ? bins.groups.some((group) => sameSet(group, moved)) : !bins.groups[target]) return null;
  if (target !== 'new' && known.every((category) => bins.groups[target].includes(category))) return null;
  const left = bins.groups.map((group, index) =>
    index === target ? [...group] : group.filter((category) => !moved.has(category)),
  );
  if (target === 'new') left.push(known);
  else left[target] = [...left[target], ...known.filter((category) => !left[target].includes(category))];
  const names = listed(target === 'new' ? known : known.filter((category) => !bins.groups[target].includes(category)));
  return {
    kind: target === 'new' ? 'category set apart' : 'categories grouped',
    what: target === 'new' ? `Set ${names} apart` : `Grouped ${names} with ${listed(bins.groups[target])}`,
    bins: rebuilt(fine, bins, left),
  };
}

export function mergeGroups(fine: FineClasses, bins: CategoricalBins, a: number, b: number): EditOf<CategoricalBins> | null {
  if (a === b || !bins.groups[a] || !bins.groups[b]) return null;
  const groups = bins.groups.map((group, index) => (index === a ? [...group, ...bins.groups[b]] : index === b ? [] : [...group]));
  return {
    kind: 'bins merged',
    what: `Merged ${listed(bins.groups[a])} with ${listed(bins.groups[b])}`,
    bins: rebuilt(fine, bins, groups),
  };
}

/** Splits a group in two along its categories' order of risk, at the best place: as `splitNumeric`. */
export function splitGroup(
  fine: FineClasses,
  bins: CategoricalBins,
  group: number,
  wish: SplitWish | null = null,
): EditOf<CategoricalBins> | null {
  const members = bins.groups[group];
  if (!members || members.length < 2) return null;
  const ordered = riskOrder(
    fine,
    members.map((category) => [category]),
  ).map((index) => members[index]);
  const candidates = ordered.slice(1).map((_, place) => {
    const [low, high] = [ordered.slice(0, place + 1), ordered.slice(place + 1)];
    const split = rebuilt(fine, bins, [...bins.groups.map((one, index) => (index === group ? low : one)), high]);
    const placeOf = (part: readonly string[]): number => split.groups.findIndex((one) => one.includes(part[0]));
    return { low, high, bins: split, parts: [placeOf(low), placeOf(high)] as const };
  });
  const best = bestSplit(fine, candidates, wish);
  if (best === null) return null;
  const { low, high, bins: split } = best.candidate;
  return { kind: 'bin split', what: `Split ${listed(low)} from ${listed(high)}${smallWords(best.small)}`, bins: split };
}

export function moveUnseen(bins: CategoricalBins, place: 'neutral' | number, label: string): EditOf<CategoricalBins> | null {
  if (bins.unseen === place) return null;
  return {
    kind: 'unseen moved',
    what: place === 'neutral' ? 'Unseen categories stay neutral' : `Unseen categories joined to ${label}`,
    bins: { ...bins, unseen: place },
  };
}

/**
 * Bins with these groups (emptied ones dropped) in order of risk. What had joined a group follows the categories that stay in its place,
 * or, where all of them went, those.
 */
function rebuilt(fine: FineClasses, bins: CategoricalBins, groups: readonly (readonly string[])[]): CategoricalBins {
  const kept = groups.filter((group) => group.length > 0);
  const ordered = riskOrder(fine, kept).map((index) => asListed(fine, kept[index]));
  const follow = (old: number): number => {
    const anchor = groups[old]?.[0] ?? bins.groups[old][0];
    return ordered.findIndex((group) => group.includes(anchor));
  };
  const move = (place: Place): Place => (place === 'own' ? 'own' : follow(place));
  return {
    ...bins,
    groups: ordered,
    special: bins.special.map(move),
    missing: move(bins.missing),
    unseen: bins.unseen === 'neutral' ? 'neutral' : follow(bins.unseen),
  };
}

/**
 * Categories of a group as the sample lists them, so that equal groups are equal lists.
 * @example asListed(fine, ['other', 'rent']) // ['rent', 'other'] where the sample has more rows with rent
 */
export function asListed(fine: FineClasses, group: readonly string[]): string[] {
  const places = new Map(fine.categories.map((category, index) => [category, index]));
  return [...group].sort((a, b) => (places.get(a) ?? Infinity) - (places.get(b) ?? Infinity));
}

function sameSet(group: readonly string[], set: ReadonlySet<string>): boolean {
  return group.length === set.size && group.every((category) => set.has(category));
}

/**
 * Names in a sentence: all of a few, the first of many with how many more there are.
 * @example listed(['owner', 'rent', 'parents', 'other']) // 'owner, rent and 2 more'
 */
export function listed(names: readonly string[], most = 3): string {
  if (names.length <= most) return names.join(', ');
  return `${names.slice(0, most - 1).join(', ')} and ${names.length - most + 1} more`;
}
