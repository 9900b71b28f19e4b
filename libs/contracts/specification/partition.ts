import type { Partition } from './types';

/**
 * How a sample is split, in words, for lists and documents.
 * @example partitionWords({ seed: 7, holdOutShare: 0.3, outOfTime: null }) // 'seed 7, 30 % hold-out'
 */
export function partitionWords(partition: Partition): string {
  if (!('seed' in partition)) return `by the values of ${partition.column}`;
  const { seed, holdOutShare, outOfTime, groups } = partition;
  const parts = [`seed ${seed}`, `${Number((holdOutShare * 100).toFixed(1))} % hold-out`];
  if (groups !== undefined) parts.push(`groups of ${groups} kept together`);
  if (outOfTime !== null) {
    const { column, from, to } = outOfTime;
    parts.push(`out-of-time by ${column}${from === null ? '' : ` from ${from}`}${to === null ? '' : ` to ${to}`}`);
  }
  return parts.join(', ');
}
