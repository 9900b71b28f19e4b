import type { ColumnTest } from '@tallystone/contracts/samples/definition';
import { readListed, readNumber, writeListed } from './listed-values';

/** What one test asks, in the words of its menu. A test of the specification may combine several; this editor makes one at a time. */
export type Condition = 'in' | 'notIn' | 'below' | 'atMost' | 'above' | 'atLeast' | 'missing' | 'not missing';

export const conditions: readonly {
  readonly key: Condition;
  readonly label: string;
  readonly kind: 'values' | 'limit' | 'missing';
}[] = [
  { key: 'in', label: 'is one of', kind: 'values' },
  { key: 'notIn', label: 'is none of', kind: 'values' },
  { key: 'below', label: 'is below', kind: 'limit' },
  { key: 'atMost', label: 'is at most', kind: 'limit' },
  { key: 'above', label: 'is above', kind: 'limit' },
  { key: 'atLeast', label: 'is at least', kind: 'limit' },
  { key: 'missing', label: 'is missing', kind: 'missing' },
  { key: 'not missing', label: 'is not missing', kind: 'missing' },
];

export function conditionOf(test: ColumnTest): Condition {
  for (const key of ['in', 'notIn', 'below', 'atMost', 'above', 'atLeast'] as const) if (test[key] !== undefined) return key;
  return test.missing === false ? 'not missing' : 'missing';
}

export function valueOf(test: ColumnTest): string {
  const condition = conditionOf(test);
  if (condition === 'missing' || condition === 'not missing') return '';
  const value = test[condition];
  return Array.isArray(value) ? writeListed(value) : String(value ?? '');
}

/** What a field cannot be taken for, to be said beside it. */
export interface NotTaken {
  readonly message: string;
}

/**
 * Values are compared as text, limits as numbers or ISO dates by the kind of the column. What is neither is never taken for another number: it is
 * refused with what can be typed instead.
 */
export function testWith(
  column: string,
  kind: 'numeric' | 'categorical' | 'date',
  condition: Condition,
  value: string,
): ColumnTest | NotTaken {
  if (condition === 'missing' || condition === 'not missing') return { column, missing: condition === 'missing' };
  if (condition === 'in' || condition === 'notIn') {
    const values = readListed(value);
    return values ? { column, [condition]: values } : { message: 'A quote is not closed. Write it as "a, b", "c".' };
  }
  const typed = value.trim();
  if (kind === 'date') {
    // A day that is none, such as 2024-02-30, moves on to another one: it comes back changed.
    const day = /^\d{4}-\d{2}-\d{2}$/.test(typed) ? new Date(`${typed}T00:00:00Z`) : null;
    const isDay = day !== null && !Number.isNaN(day.getTime()) && day.toISOString().startsWith(typed);
    return isDay ? { column, [condition]: typed } : { message: 'Type a day as 2024-12-31.' };
  }
  const number = readNumber(typed);
  return number === null
    ? { message: 'Type a number without thousands signs, such as 1000 or 1234.5.' }
    : { column, [condition]: number };
}
