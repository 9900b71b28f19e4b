import type { DefinitionCounts } from '@tallystone/contracts/samples/definition';

/** The same counts with the outcome of out-of-time withheld; its number of rows is told. */
export function covered(counts: DefinitionCounts): DefinitionCounts {
  const { outOfTime } = counts.partitions;
  if (outOfTime.rows === 0) return counts;
  return {
    ...counts,
    waterfall: counts.waterfall.map((step) => (step.kind === 'out-of-time' ? { ...step, outGoods: null, outBads: null } : step)),
    partitions: {
      ...counts.partitions,
      outOfTime: {
        covered: true,
        rows: outOfTime.rows,
        goods: null,
        bads: null,
        indeterminates: null,
        weight: null,
        badRate: null,
      },
    },
  };
}
