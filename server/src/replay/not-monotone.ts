import type { Result } from '@tallystone/contracts/result/types';
import type { Specification } from '@tallystone/contracts/specification/types';
import { observedTrend } from '@tallystone/numeric/bench';

/**
 * Numeric characteristics in the model whose WOE does not only rise or only fall along the values; special codes and missing stand apart.
 *
 * @example notMonotone(specification, result) // ['age']
 * Source: monotone WOE unless a reason is recorded is common practice.
 */
export function notMonotone(specification: Specification, result: Pick<Result, 'characteristics'>): string[] {
  const stated = new Map(specification.characteristics.map((entry) => [entry.column, entry]));
  return result.characteristics.flatMap(({ column, coefficient, bins }) => {
    const entry = stated.get(column);
    if (entry?.kind !== 'numeric' || entry.coding === 'linear') return [];
    const kept = coefficient === null ? bins.some((bin) => (bin.coefficient ?? 0) !== 0) : coefficient !== 0;
    const along = bins.slice(0, entry.edges.length + 1);
    const trend = observedTrend(along.map(({ woe }) => woe), along.map(({ rows }) => rows)); // prettier-ignore
    return kept && ['one-peak', 'one-valley', 'mixed'].includes(trend) ? [column] : [];
  });
}
