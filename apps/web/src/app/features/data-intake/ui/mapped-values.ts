import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { MappedValue } from './value-mapping';

/**
 * The values of a column, the missing ones too, each with what it is taken to mean; behind them what something is said of though the column does not
 * list it, so that it can be taken back.
 *
 * @param lists values by their meaning
 * @example mappedValues(profile, { good: ['0'], bad: ['1'] })
 */
export function mappedValues(
  { mostFrequent, missingTokens }: Pick<ColumnProfile, 'mostFrequent' | 'missingTokens'>,
  lists: Readonly<Record<string, readonly string[]>>,
): MappedValue[] {
  const meanings = new Map(
    Object.entries(lists).flatMap(([meaning, values]) => values.map((value) => [value, meaning] as const)),
  );
  const listed = [...mostFrequent, ...missingTokens];
  const there = new Set(listed.map(({ value }) => value));
  return [
    ...listed.map(({ value, count }) => ({ value, count, meaning: meanings.get(value) ?? null })),
    ...[...meanings].filter(([value]) => !there.has(value)).map(([value, meaning]) => ({ value, count: null, meaning })),
  ];
}
