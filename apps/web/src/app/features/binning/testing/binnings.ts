import type { Binning, CharacteristicList, CharacteristicSummary } from '@tallystone/contracts/binnings/schema';
import { utilisation } from './characteristics';

/** An invented binning that is classed, that may be edited, and whose out-of-time rows are covered. */
export const firstBinning: Binning = {
  id: 'b1',
  modelId: 'm1',
  number: 1,
  name: 'First binning',
  state: 'ready',
  runId: null,
  definitionId: 'd1',
  sampleId: 's1',
  sample: 'applicants.csv, definition 1',
  characteristics: 4,
  included: 3,
  edits: 0,
  editsWithoutReason: 0,
  from: null,
  createdBy: 'Modeller',
  createdAt: '2026-03-01T10:00:00.000Z',
  erased: null,
  constraints: {
    fineClasses: 100,
    smallestShare: 0.05,
    smallestGoods: 20,
    smallestBads: 20,
    mostBins: 8,
    smallestDifference: 0.05,
    trend: 'monotone',
  },
  outOfTime: 'covered',
  outOfTimeOpenings: null,
  barred: [],
  problem: null,
  abilities: ['edit'],
};

/** What the list says of a characteristic. */
export function listed(column: string, change: Partial<CharacteristicSummary> = {}): CharacteristicSummary {
  const { definition: _d, current: _c, automatic: _a, constraints: _k, fine: _f, editList: _e, notCarriedList: _n, changedBy: _b, changedAt: _t, abilities: _may, ...summary } = utilisation; // prettier-ignore
  return { ...summary, id: `id-of-${column}`, column, ...change };
}

export const listOf = (
  characteristics: CharacteristicSummary[],
  change: Partial<CharacteristicList> = {},
): CharacteristicList => ({
  characteristics,
  finding: '3 of 3 characteristics read medium or strong, none with a warning.',
  correlations: { calculatedAt: '2026-03-01T10:05:00.000Z', changed: [], runId: null },
  ...change,
});
