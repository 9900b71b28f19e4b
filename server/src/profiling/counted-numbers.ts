import type { Counted } from './kind';

/** Distinct numbers of a column, ascending, with the rows of each and how it is spelled. */
export interface CountedNumbers {
  readonly length: number;
  readonly values: Float64Array;
  readonly counts: Float64Array;
  text(place: number): string;
}

/** Distinct numbers of texts; those that spell the same number are one, spelled as the first of them. */
export function countNumbers(counted: readonly Counted[], read: (text: string) => number): CountedNumbers {
  const byValue = new Map<number, { value: number; text: string; count: number }>();
  for (const { text, count } of counted) {
    const value = read(text);
    if (Number.isNaN(value)) continue;
    const known = byValue.get(value);
    if (known) known.count += count;
    else byValue.set(value, { value, text, count });
  }
  const sorted = [...byValue.values()].sort((a, b) => a.value - b.value);
  return {
    length: sorted.length,
    values: Float64Array.from(sorted, ({ value }) => value),
    counts: Float64Array.from(sorted, ({ count }) => count),
    text: (place) => sorted[place].text,
  };
}

/** Without those at these places. */
export function withoutPlaces(numbers: CountedNumbers, dropped: ReadonlySet<number>): CountedNumbers {
  if (dropped.size === 0) return numbers;
  const kept = numbers.length - dropped.size;
  const [values, counts, places] = [new Float64Array(kept), new Float64Array(kept), new Int32Array(kept)];
  for (let place = 0, at = 0; place < numbers.length; place++) {
    if (dropped.has(place)) continue;
    values[at] = numbers.values[place];
    counts[at] = numbers.counts[place];
    places[at++] = place;
  }
  return { length: kept, values, counts, text: (place) => numbers.text(places[place]) };
}
