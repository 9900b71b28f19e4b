import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { CountedNumbers } from './counted-numbers';
import { thin } from './kind';

export interface SuspectedCodes {
  readonly suspects: ColumnProfile['specialSuspects'];
  /** Where they are among the numbers. */
  readonly places: ReadonlySet<number>;
}

/**
 * Numbers that may be codes ("no bureau record") rather than amounts: repeated, at the end of the range, and either written in nines or
 * far from everything else. Suspicions for a person to settle; nothing is treated as a code on its own.
 */
export function suspectSpecials(numbers: CountedNumbers): SuspectedCodes {
  const { values, counts, length } = numbers;
  let rows = 0;
  for (let place = 0; place < length; place++) rows += counts[place];
  const enough = Math.max(5, rows * 0.0005);
  const suspects: ColumnProfile['specialSuspects'] = [];
  const places = new Set<number>();
  const consider = (end: 'smallest' | 'largest'): void => {
    // What is left lies from `low` to before `high`.
    let low = 0;
    let high = length;
    for (let round = 0; round < 5 && low < high; round++) {
      const place = end === 'smallest' ? low++ : --high;
      const value = values[place];
      const count = counts[place];
      // Codes come in runs (9997, 9998, 9999): the distance that counts is that to the nearest value of another kind.
      const [first, last] = otherKind(values, low, high, value);
      if (count < enough || first >= last) return;
      const next = end === 'smallest' ? values[first] : values[last - 1];
      const spread = values[last - 1] - values[first];
      const gap = Math.abs(next - value);
      const text = numbers.text(place);
      const nines = /^-?(9+[6-9]|8{3,})(\.0+)?$/.test(text);
      const negative = value < 0 && Number.isInteger(value) && negativesAreCodes(values, low, high);
      const far = gap > spread * 0.5 && isCodeLike(value);
      // Among few values only what is written like a code can be told from a scale.
      const few = last - first < 7;
      if (few ? !(negative && nines) : !(nines || negative || far)) return;
      // A run of whole numbers that simply ends at 99 is a range, not a code.
      if (nines && !negative && gap <= Math.max(1, spread * 0.05)) return;
      const reason = negative
        ? 'negative where every other value is not'
        : nines
          ? 'written in nines at the end of the range'
          : 'far from every other value';
      places.add(place);
      suspects.push({ value: text, count, reason: `${thin(count)} times, ${reason}.` });
    }
  };
  consider('smallest');
  consider('largest');
  if (length < 50) return { suspects, places };
  // Written in nines and as frequent as no amount is, wherever it lies among them.
  for (let place = 0; place < length && values[place] < 0; place++) {
    const count = counts[place];
    if (count < 0.02 * rows) continue;
    const text = numbers.text(place);
    if (!/^-9{1,}[6-9](\.0+)?$/.test(text) || places.has(place)) continue;
    places.add(place);
    suspects.push({
      value: text,
      count,
      reason: `${thin(count)} times, written in nines and far more frequent than any amount beside it.`,
    });
  }
  return { suspects, places };
}

/** Of the ascending values from `low` to before `high`, those that are more than 3 away from one beyond either end: from, to. */
function otherKind(values: Float64Array, low: number, high: number, value: number): [number, number] {
  let first = low;
  let last = high;
  if (first < last && values[first] >= value) while (first < last && !(values[first] - value > 3)) first++;
  else while (first < last && !(value - values[last - 1] > 3)) last--;
  return [first, last];
}

/** Whether every negative value among the ascending ones is spelled like a code. */
function negativesAreCodes(values: Float64Array, low: number, high: number): boolean {
  for (let place = low; place < high && values[place] < 0; place++) if (!isCodeLike(values[place])) return false;
  return true;
}

/** Spelled as people spell codes: 99, 888, 7777, 9000, -1 to -9. */
function isCodeLike(value: number): boolean {
  if (!Number.isInteger(value)) return false;
  return (value < 0 && value >= -9) || /^-?(9+[6-9]|9{2,}|8{2,}|7{2,}|1{3,}|\d0{3,})$/.test(String(value));
}
