import type { DefinitionCounts, WaterfallStep } from '@tallystone/contracts/samples/definition';

/** The same counts with the outcome of out-of-time withheld; its number of rows is told. */
export function covered(counts: DefinitionCounts): DefinitionCounts {
  const { outOfTime } = counts.partitions;
  if (outOfTime.rows === 0) return counts;
  return {
    ...counts,
    waterfall: coveredWaterfall(counts),
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
        ...('weightedBadRate' in outOfTime && { weightedBadRate: null }),
      },
    },
  };
}

/**
 * The waterfall as if nobody of out-of-time had an outcome: goods and bads of what is left count the other rows alone, from the first step on, so
 * that no difference between two steps tells what its own step does not.
 */
function coveredWaterfall({ waterfall, partitions: { outOfTime } }: DefinitionCounts): WaterfallStep[] {
  const place = waterfall.findIndex(({ kind }) => kind === 'out-of-time');
  return waterfall.map((step, index) => {
    const hidden = index === place ? { ...step, outGoods: null, outBads: null } : step;
    if (index >= place || step.leftGoods === undefined || step.leftBads === undefined) return hidden;
    return { ...hidden, leftGoods: step.leftGoods - (outOfTime.goods ?? 0), leftBads: step.leftBads - (outOfTime.bads ?? 0) };
  });
}
