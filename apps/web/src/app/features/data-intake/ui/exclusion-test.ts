import type { ColumnTest } from '@tallystone/contracts/samples/definition';

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
  return Array.isArray(value) ? value.join(', ') : String(value ?? '');
}

/** Values are compared as text, limits as numbers or ISO dates by the kind of the column; what is no number becomes 0, which the person sees. */
export function testWith(
  column: string,
  kind: 'numeric' | 'categorical' | 'date',
  condition: Condition,
  value: string,
): ColumnTest {
  if (condition === 'missing' || condition === 'not missing') return { column, missing: condition === 'missing' };
  if (condition === 'in' || condition === 'notIn') {
    return {
      column,
      [condition]: value
        .split(',')
        .map((part) => part.trim())
        .filter((part) => part !== ''),
    };
  }
  if (kind === 'date' && /^\d{4}-\d{2}-\d{2}$/.test(value)) return { column, [condition]: value };
  const number = Number(value.replace(',', '.').replace('\u2212', '-'));
  return { column, [condition]: Number.isFinite(number) && value.trim() !== '' ? number : 0 };
}
