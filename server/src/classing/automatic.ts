import type { Bins, Constraints, Fine, SlotCounts } from '@tallystone/contracts/binnings/bins';
import type { Warning } from '@tallystone/contracts/binnings/schema';
import { benchWarnings, classCount, readBench, readingOfIv } from '@tallystone/numeric/bench';
import { classCategories } from '@tallystone/numeric/binning/categories';
import { classNumeric } from '@tallystone/numeric/binning/classing';

/** Bins of one characteristic under constraints, from its fine classes; special codes and missing in bins of their own. */
export function classFine(fine: Fine, constraints: Constraints): Bins {
  const own = { special: fine.special.map(() => 'own' as const), missing: 'own' as const };
  const classes = classCount(fine);
  const { rows, goods, bads } = fine.development;
  const totals = { goods: sum(goods), bads: sum(bads) };
  if (fine.kind === 'numeric') {
    const known = { rows: rows.slice(0, classes), goods: goods.slice(0, classes), bads: bads.slice(0, classes) };
    const { cuts } = classNumeric(known, constraints, totals);
    return { kind: 'numeric', edges: cuts.map((cut) => fine.edges[cut - 1]), ...own };
  }
  const categories = fine.categories.map((_, slot) => ({ rows: rows[slot], goods: goods[slot], bads: bads[slot] }));
  const { groups } = classCategories(categories, constraints, totals);
  return {
    kind: 'categorical',
    groups: groups.map((group) => group.map((slot) => fine.categories[slot])),
    ...own,
    unseen: 'neutral',
  };
}

export interface Summarised {
  readonly summary: {
    informationValue: number;
    reading: ReturnType<typeof readingOfIv>;
    gini: number;
    missingShare: number;
    bins: number;
    trend: ReturnType<typeof readBench>['trend'];
    warnings: Warning[];
  };
  /** Those that out-of-time figures give: kept apart until they are opened. */
  readonly outOfTimeWarnings: Warning[];
}

/** What the list shows about a characteristic: the browser's own calculation, made on the server. */
export function summarise(fine: Fine, outOfTime: SlotCounts, bins: Bins, constraints: Constraints): Summarised {
  const reading = readBench({ ...fine, outOfTime }, bins);
  const warnings = benchWarnings(reading, constraints).map((warning) => ({ ...warning, bins: [...warning.bins] }));
  return {
    summary: {
      informationValue: reading.informationValue,
      reading: readingOfIv(reading.informationValue),
      gini: reading.gini,
      missingShare: reading.missingShare,
      bins: reading.bins.length,
      trend: reading.trend,
      warnings: warnings.filter(({ code }) => code !== 'reversed-out-of-time'),
    },
    outOfTimeWarnings: warnings.filter(({ code }) => code === 'reversed-out-of-time'),
  };
}

function sum(values: readonly number[]): number {
  return values.reduce((total, value) => total + value, 0);
}
