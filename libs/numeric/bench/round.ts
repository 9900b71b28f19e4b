/**
 * How many significant digits a number is written with; 0 for zero, the roundest of all.
 * @example digitsOf(1500) // 2
 */
export function digitsOf(value: number): number {
  if (value === 0 || !Number.isFinite(value)) return value === 0 ? 0 : Infinity;
  return value.toExponential().split('e')[0].replace(/[-.]/g, '').length;
}

/**
 * The number with the fewest significant digits strictly between two limits, nearest to a value among those; null where the value is as round itself.
 * @param below and above limits that the number may not reach, `below < value < above`
 * @example rounderNear(33.4, 31, 37) // 35 is as round as 33, which is nearer: 33
 * @example rounderNear(1987.5, 1500, 2400) // 2000
 */
export function rounderNear(value: number, below: number, above: number): number | null {
  if (below < 0 && above > 0) return value === 0 ? null : 0;
  for (let digits = 1; digits < digitsOf(value); digits++) {
    const candidate = Number(value.toPrecision(digits));
    if (candidate > below && candidate < above) return candidate;
  }
  return null;
}

/**
 * Of values in reach the roundest, and of equally round ones the nearest: where a cut snaps to. None in reach: the nearest of all.
 * @param away how far each value is from where the cut was let go, in any unit
 * @example snapped([{ value: 29.5, away: 1 }, { value: 30, away: 4 }], 10)?.value // 30
 */
export function snapped<Place extends { readonly value: number; readonly away: number }>(
  places: readonly Place[],
  reach: number,
): Place | null {
  let best: Place | null = null;
  for (const place of places) {
    if (best === null || better(place, best, reach)) best = place;
  }
  return best;
}

function better(a: { value: number; away: number }, b: { value: number; away: number }, reach: number): boolean {
  if (a.away > reach || b.away > reach) return a.away < b.away;
  const [digits, known] = [digitsOf(a.value), digitsOf(b.value)];
  return digits < known || (digits === known && a.away < b.away);
}
