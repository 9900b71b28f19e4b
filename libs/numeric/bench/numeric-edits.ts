import { type SplitWish, bestSplit } from './best-split';
import { rangeLabel } from './labels';
import { rounderNear } from './round';
import type { FineClasses, NumericBins, Place } from './types';

/** Manual edits of a numeric characteristic. Each gives new bins with one sentence about what was done, or null where it cannot be done. */
export type EditKind =
  | 'cut moved'
  | 'cut added'
  | 'bins merged'
  | 'bin split'
  | 'categories grouped'
  | 'category set apart'
  | 'special moved'
  | 'missing moved'
  | 'unseen moved';

export interface EditOf<B> {
  readonly kind: EditKind;
  readonly what: string;
  readonly bins: B;
}

/** Moves one cut to another fine edge between its neighbours. */
export function moveCut(fine: FineClasses, bins: NumericBins, cut: number, edge: number): EditOf<NumericBins> | null {
  const from = bins.edges[cut];
  if (from === undefined || from === edge || !fine.edges.includes(edge)) return null;
  if (edge <= (bins.edges[cut - 1] ?? -Infinity) || edge >= (bins.edges[cut + 1] ?? Infinity)) return null;
  return {
    kind: 'cut moved',
    what: `Cut moved from ${from} to ${edge}`,
    bins: { ...bins, edges: bins.edges.map((value, index) => (index === cut ? edge : value)) },
  };
}

/** The fine edge next to a cut on one side, short of the neighbouring cut; null where there is none. */
export function edgeBeside(fine: FineClasses, bins: NumericBins, cut: number, direction: -1 | 1): number | null {
  const from = bins.edges[cut];
  const inReach = fine.edges.filter(
    (edge) => edge > (bins.edges[cut - 1] ?? -Infinity) && edge < (bins.edges[cut + 1] ?? Infinity),
  );
  const next = direction > 0 ? inReach.find((edge) => edge > from) : inReach.findLast((edge) => edge < from);
  return next ?? null;
}

/** The fine edge within reach of a cut that is nearest to a value. */
export function edgeNear(fine: FineClasses, bins: NumericBins, cut: number, value: number): number | null {
  let best: number | null = null;
  for (const edge of fine.edges) {
    if (edge <= (bins.edges[cut - 1] ?? -Infinity) || edge >= (bins.edges[cut + 1] ?? Infinity)) continue;
    if (best === null || Math.abs(edge - value) < Math.abs(best - value)) best = edge;
  }
  return best;
}

/**
 * The round number that a cut can take without passing more than half of the fine class on either side; null where it is as round as can be.
 * @example rounderCut(fine, bins, 0) // 30 for a cut at 29.6 between fine edges 28 and 31
 */
export function rounderCut(fine: FineClasses, bins: NumericBins, cut: number): number | null {
  const from = bins.edges[cut];
  if (from === undefined) return null;
  const below = fine.edges.findLast((edge) => edge < from) ?? fine.range?.[0] ?? from;
  const above = fine.edges.find((edge) => edge > from) ?? fine.range?.[1] ?? from;
  return rounderNear(from, (from + below) / 2, (from + above) / 2);
}

export function addCut(fine: FineClasses, bins: NumericBins, edge: number): EditOf<NumericBins> | null {
  if (!fine.edges.includes(edge) || bins.edges.includes(edge)) return null;
  const at = bins.edges.findIndex((value) => value > edge);
  const place = at < 0 ? bins.edges.length : at;
  return { kind: 'cut added', what: `Cut added at ${edge}`, bins: withCut(bins, place, edge) };
}

/** Takes out the cut between a bin and the next one. */
export function mergeNumeric(fine: FineClasses, bins: NumericBins, bin: number): EditOf<NumericBins> | null {
  if (bin < 0 || bin >= bins.edges.length) return null;
  const [left, right] = [rangeLabel(bins.edges, bin, fine.closed), rangeLabel(bins.edges, bin + 1, fine.closed)];
  const move = (place: Place): Place => (typeof place === 'number' && place > bin ? place - 1 : place);
  return {
    kind: 'bins merged',
    what: `Merged ${left} with ${right}`,
    bins: {
      ...bins,
      edges: bins.edges.filter((_, index) => index !== bin),
      special: bins.special.map(move),
      missing: move(bins.missing),
    },
  };
}

/**
 * Splits a bin at its best cut: both parts as large as the constraints ask where that can be, best by their criterion, or by information value without any.
 * Null where the bin is a single fine class, or no cut leaves goods and bads on both sides.
 * @param wish the constraints of the characteristic; null without any
 */
export function splitNumeric(
  fine: FineClasses,
  bins: NumericBins,
  bin: number,
  wish: SplitWish | null = null,
): EditOf<NumericBins> | null {
  const [from, to] = [bins.edges[bin - 1] ?? -Infinity, bins.edges[bin] ?? Infinity];
  const candidates = fine.edges
    .filter((edge) => edge > from && edge < to)
    .map((edge) => ({ edge, bins: withCut(bins, bin, edge), parts: [bin, bin + 1] as const }));
  const best = bestSplit(fine, candidates, wish);
  if (best === null) return null;
  const { edge, bins: split } = best.candidate;
  return {
    kind: 'bin split',
    what: `Split ${rangeLabel(bins.edges, bin, fine.closed)} at ${edge}${smallWords(best.small)}`,
    bins: split,
  };
}

/** Said of a split that no cut within the constraints could make. */
export const smallWords = (small: boolean): string => (small ? ', into less than the constraints ask for' : '');

/** Joins a special code to a bin of the cuts or groups, or gives it its own. */
export function moveSpecial<B extends { readonly special: readonly Place[] }>(
  fine: FineClasses,
  bins: B,
  code: number,
  place: Place,
  label: string,
): EditOf<B> | null {
  if (bins.special[code] === undefined || bins.special[code] === place) return null;
  return {
    kind: 'special moved',
    what: place === 'own' ? `${fine.special[code]} set apart in a bin of its own` : `${fine.special[code]} joined to ${label}`,
    bins: { ...bins, special: bins.special.map((value, index) => (index === code ? place : value)) },
  };
}

export function moveMissing<B extends { readonly missing: Place }>(bins: B, place: Place, label: string): EditOf<B> | null {
  if (bins.missing === place) return null;
  return {
    kind: 'missing moved',
    what: place === 'own' ? 'Missing set apart in a bin of its own' : `Missing joined to ${label}`,
    bins: { ...bins, missing: place },
  };
}

/** A new cut inside a bin: what had joined a bin further along keeps its bin. */
function withCut(bins: NumericBins, bin: number, edge: number): NumericBins {
  const move = (place: Place): Place => (typeof place === 'number' && place > bin ? place + 1 : place);
  return {
    ...bins,
    edges: [...bins.edges.slice(0, bin), edge, ...bins.edges.slice(bin)],
    special: bins.special.map(move),
    missing: move(bins.missing),
  };
}
