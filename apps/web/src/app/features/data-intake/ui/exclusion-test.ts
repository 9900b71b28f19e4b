import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { ColumnTest } from '@tallystone/contracts/samples/definition';
import { type NumberSigns, readListedNumbers } from './listed-numbers';
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

/** What a column holds, as far as its profile lists it, and how its numbers are written. */
export interface Held {
  readonly texts: readonly string[];
  readonly signs: NumberSigns;
}

/**
 * Values are compared as text, and those of a column of numbers are taken to the texts that it has for them; limits as numbers or ISO dates by the kind of the column. What is neither is never taken for another number: it is
 * refused with what can be typed instead.
 */
export function testWith(
  column: string,
  kind: 'numeric' | 'categorical' | 'date',
  condition: Condition,
  value: string,
  held: Held | null = null,
): ColumnTest | NotTaken {
  if (condition === 'missing' || condition === 'not missing') return { column, missing: condition === 'missing' };
  if (condition === 'in' || condition === 'notIn') {
    if (!readListed(value)) return { message: 'A quote is not closed. Write it as "a, b", "c".' };
    const values = kind === 'numeric' && held ? readListedNumbers(value, held.signs, held.texts) : readListed(value);
    return values
      ? { column, [condition]: values }
      : { message: 'Leave a blank behind each comma that parts two values, as in 1,5, 2,5.' };
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

/** Listed values that no row holds, where the profile lists them all: a rule that names them takes out nothing, or nothing less. */
export function notHeld({ in: within = [], notIn = [] }: ColumnTest, profile: ColumnProfile | undefined): string | null {
  if (!profile?.valuesComplete) return null;
  const held = new Set(profile.mostFrequent.map(({ value }) => value));
  const missing = new Set(profile.missingTokens.map(({ value }) => value));
  const strangers = [...within, ...notIn].filter((value) => !held.has(value));
  const none = strangers.filter((value) => !missing.has(value));
  const said = [
    ...(none.length > 0 ? [`No row holds ${writeListed(none)}: values are compared as they are written in the file.`] : []),
    ...(none.length < strangers.length
      ? [`${writeListed(strangers.filter((value) => missing.has(value)))} is a missing value, which “is missing” alone takes.`]
      : []),
  ];
  return said.length > 0 ? said.join(' ') : null;
}
