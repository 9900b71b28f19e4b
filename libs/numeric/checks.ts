import { NumericError } from './errors';

/** Throws when two arrays that describe the same rows differ in length. */
export function requireSameLength(name: string, actual: number, expected: number): void {
  if (actual !== expected) {
    throw new NumericError('length-mismatch', `${name} has ${actual} values where ${expected} are expected.`, {
      name,
      actual,
      expected,
    });
  }
}

/** Throws at the first value that is NaN or infinite and names its place (index from 0). */
export function requireFinite(name: string, values: ArrayLike<number>): void {
  for (let i = 0; i < values.length; i++) {
    if (!Number.isFinite(values[i])) {
      throw new NumericError('not-a-number', `${name} has ${values[i]} at index ${i}.`, { name, index: i });
    }
  }
}

/** Throws for NaN; infinite is a number. */
export function requireNumber(name: string, value: number): void {
  if (Number.isNaN(value)) throw new NumericError('not-a-number', `${name} is NaN.`, { name });
}

/** Weights must be finite and not negative, with a total that is positive and finite. Returns the total. */
export function requireWeights(name: string, weights: ArrayLike<number>): number {
  let total = 0;
  for (let i = 0; i < weights.length; i++) {
    const w = weights[i];
    if (!Number.isFinite(w)) throw new NumericError('not-a-number', `${name} has ${w} at index ${i}.`, { name, index: i });
    if (w < 0) throw new NumericError('out-of-range', `${name} is negative at index ${i}.`, { name, index: i });
    total += w;
  }
  if (!(total > 0)) throw new NumericError('out-of-range', `${name} adds up to zero.`, { name });
  if (total === Infinity) throw new NumericError('out-of-range', `${name} adds up to more than a number can hold.`, { name });
  return total;
}

/** Outcomes are 1 for good and 0 for bad. */
export function requireOutcome(outcome: ArrayLike<number>): void {
  for (let i = 0; i < outcome.length; i++) {
    if (outcome[i] !== 0 && outcome[i] !== 1) {
      throw new NumericError('out-of-range', `outcome is ${outcome[i]} at index ${i}; 1 (good) or 0 (bad) is expected.`, {
        name: 'outcome',
        index: i,
      });
    }
  }
}

/** Throws unless the condition holds. */
export function requireThat(holds: boolean, name: string, message: string): asserts holds {
  if (!holds) throw new NumericError('out-of-range', message, { name });
}
