import { edgeBeside, snapped, type FineClasses, type NumericBins } from '@tallystone/numeric/bench';
import type { Geometry } from './geometry';

/** Where a cut goes, by keys and when it is let go: pure, so that it can be tested without drawing. Every place is a fine edge between its neighbours. */

/** A cut that is let go this near to a round number goes there, unless Alt is held; this near to where it began, it stays. */
const snapReach = 10; // px

/** The first and the last place a cut can take; where it stands, if it can take no other. */
export function reachOf(fine: FineClasses, { edges }: NumericBins, cut: number): { min: number; max: number } {
  const within = fine.edges.filter((edge) => edge > (edges[cut - 1] ?? -Infinity) && edge < (edges[cut + 1] ?? Infinity));
  return { min: within[0] ?? edges[cut], max: within[within.length - 1] ?? edges[cut] };
}

/** So many fine edges on, or as far as its neighbour allows; null where it cannot move at all. */
function along(fine: FineClasses, bins: NumericBins, cut: number, steps: number): number | null {
  let at = bins;
  let found: number | null = null;
  for (let step = 0; step < Math.abs(steps); step++) {
    const next = edgeBeside(fine, at, cut, steps > 0 ? 1 : -1);
    if (next === null) break;
    found = next;
    at = { ...at, edges: at.edges.map((value, index) => (index === cut ? next : value)) };
  }
  return found;
}

type CutMove = (fine: FineClasses, bins: NumericBins, cut: number) => number | null;
const by =
  (steps: number): CutMove =>
  (fine, bins, cut) =>
    along(fine, bins, cut, steps);

/** Where each key moves a cut to. */
export const cutMoves: Readonly<Partial<Record<string, CutMove>>> = {
  ArrowRight: by(1),
  ArrowUp: by(1),
  ArrowLeft: by(-1),
  ArrowDown: by(-1),
  PageUp: by(5),
  PageDown: by(-5),
  Home: (fine, bins, cut) => reachOf(fine, bins, cut).min,
  End: (fine, bins, cut) => reachOf(fine, bins, cut).max,
};

/**
 * The fine edge that a cut comes to which is let go so many pixels from where it began: the one it began at where it is within a few pixels of it,
 * else a rounder one within a few pixels, else the nearest. `exact` gives the nearest. The cut goes as far as the pointer went, wherever in its grip it
 * was taken.
 */
export function edgeLetGo(
  places: Geometry['edges'],
  { edges }: NumericBins,
  cut: number,
  away: number,
  exact: boolean,
): number | null {
  const [low, high] = [edges[cut - 1] ?? -Infinity, edges[cut + 1] ?? Infinity];
  const began = places.find(({ edge }) => edge === edges[cut]);
  if (!began) return null;
  if (!exact && Math.abs(away) <= snapReach) return began.edge;
  const x = began.x + away;
  const within = places
    .filter(({ edge }) => edge > low && edge < high)
    .map((place) => ({ value: place.edge, away: Math.abs(place.x - x) }));
  return snapped(within, exact ? 0 : snapReach)?.value ?? null;
}
