import { requireFinite, requireThat } from '../checks';
import { NumericError } from '../errors';

/** What a bin of known values must satisfy. */
export interface Constraints {
  /** Smallest share of the rows counted here. */
  readonly smallestShare: number;
  readonly smallestGoods: number;
  readonly smallestBads: number;
  readonly mostBins: number;
  /** Smallest absolute difference between the weights of evidence of neighbouring bins. */
  readonly smallestDifference: number;
  /** Of weight of evidence over the bins; "one-peak" rises then falls, "one-valley" falls then rises, one part may be empty. */
  readonly trend: 'any' | 'rising' | 'falling' | 'one-peak' | 'one-valley';
  /** What is best: the largest information value (when left out), or the smallest deviance of the bad rates of the bins. */
  readonly criterion?: 'information value' | 'deviance' | undefined;
}

export type Trend = 'flat' | 'rising' | 'falling' | 'one-peak' | 'one-valley' | 'mixed';

export interface FineCounts {
  readonly goods: ArrayLike<number>;
  readonly bads: ArrayLike<number>;
  readonly rows: ArrayLike<number>;
}

export interface NumericClassing {
  /** A cut before fine class i, ascending; none when no two bins satisfy the constraints. */
  readonly cuts: number[];
  /** Of the bins of known values. */
  readonly informationValue: number;
  /** What the bins found show. */
  readonly trend: Trend;
  /** How good they are by the criterion in force, larger is better: the information value, or minus half the deviance of the bad rates. For comparing trends. */
  readonly worth: number;
}

/**
 * Merges neighbouring fine classes into the bins that are best by the criterion (largest information value, or smallest deviance) among all that satisfy
 * every constraint: exact, by dynamic programming over (last bin, number of bins, part of the trend). Each bin has a good and a bad at least, so that no
 * weight of evidence is infinite. Of solutions that are equally good the one with fewer bins is taken. When even a single bin breaks a constraint, a single bin is returned.
 *
 * @param fine goods and bads (weighted) and rows of each fine class in the order of values
 * @param constraints what every bin has to satisfy
 * @param totals goods and bads of the whole characteristic when special or missing values have bins of their own; default: those of `fine`
 * @returns cuts (numbers of fine classes), information value in nats and the trend found
 * @throws NumericError for NaN, negative counts, different lengths
 * @example classNumeric({ goods: [10, 20, 60], bads: [20, 18, 10], rows: [30, 38, 70] }, constraints).cuts // [1, 2] where nothing forbids three bins
 * Source: R. Bellman, Dynamic Programming, 1957; W. D. Fisher, On grouping for maximum homogeneity, JASA 53, 1958 (contiguous optimal grouping);
 * the deviance as a measure of a partition: L. Breiman et al., Classification and Regression Trees, 1984 (from memory).
 */
export function classNumeric(
  fine: FineCounts,
  constraints: Constraints,
  totals?: { goods: number; bads: number },
): NumericClassing {
  const table = new BinTable(fine, constraints, totals);
  const cuts = bestCuts(table, constraints);
  const ends = [...cuts, table.classes];
  let start = 0;
  let informationValue = 0;
  let worth = 0;
  const woes = ends.map((end) => {
    informationValue += table.value(start, end);
    worth += table.worth(start, end);
    const woe = table.woe(start, end);
    start = end;
    return woe;
  });
  return { cuts, informationValue, trend: trendOf(woes), worth };
}

/** The trend of weights of evidence over ordered bins. @example trendOf([-1, 0, 1]) // 'rising' */
export function trendOf(woe: ArrayLike<number>): Trend {
  const turns: number[] = [];
  for (let i = 1; i < woe.length; i++) {
    const direction = Math.sign(woe[i] - woe[i - 1]);
    if (direction !== 0 && direction !== turns[turns.length - 1]) turns.push(direction);
  }
  if (turns.length === 0) return 'flat';
  if (turns.length === 1) return turns[0] > 0 ? 'rising' : 'falling';
  if (turns.length === 2) return turns[0] > 0 ? 'one-peak' : 'one-valley';
  return 'mixed';
}

/** Counts of every run of fine classes, by cumulated sums. */
class BinTable {
  readonly classes: number;
  private readonly goods: Float64Array;
  private readonly bads: Float64Array;
  private readonly rows: Float64Array;
  private readonly totalGoods: number;
  private readonly totalBads: number;

  constructor(
    fine: FineCounts,
    private readonly constraints: Constraints,
    totals?: { goods: number; bads: number },
  ) {
    requireFinite('smallestShare', [
      constraints.smallestShare,
      constraints.smallestGoods,
      constraints.smallestBads,
      constraints.smallestDifference,
    ]);
    requireThat(
      Number.isInteger(constraints.mostBins) && constraints.mostBins >= 1,
      'mostBins',
      'mostBins is a whole number of at least 1.',
    );
    this.classes = fine.rows.length;
    if (this.classes === 0) throw new NumericError('no-rows', 'There is no fine class.', { name: 'fine' });
    this.goods = cumulated('goods', fine.goods, this.classes);
    this.bads = cumulated('bads', fine.bads, this.classes);
    this.rows = cumulated('rows', fine.rows, this.classes);
    this.totalGoods = totals?.goods ?? this.goods[this.classes];
    this.totalBads = totals?.bads ?? this.bads[this.classes];
  }

  allowed(start: number, end: number): boolean {
    const { constraints } = this;
    const goods = this.goods[end] - this.goods[start];
    const bads = this.bads[end] - this.bads[start];
    const rows = this.rows[end] - this.rows[start];
    return (
      goods > 0 &&
      bads > 0 &&
      goods >= constraints.smallestGoods &&
      bads >= constraints.smallestBads &&
      // A share of exactly the smallest is allowed whatever the division rounds to.
      rows >= constraints.smallestShare * this.rows[this.classes] * (1 - 1e-12)
    );
  }

  woe(start: number, end: number): number {
    const goods = (this.goods[end] - this.goods[start]) / this.totalGoods;
    const bads = (this.bads[end] - this.bads[start]) / this.totalBads;
    return goods > 0 && bads > 0 ? Math.log(goods / bads) : 0;
  }

  /** What a bin adds to the criterion, which is made as large as it can be. */
  worth(start: number, end: number): number {
    if (this.constraints.criterion !== 'deviance') return this.value(start, end);
    const goods = this.goods[end] - this.goods[start];
    const bads = this.bads[end] - this.bads[start];
    const all = goods + bads;
    return (goods > 0 ? goods * Math.log(goods / all) : 0) + (bads > 0 ? bads * Math.log(bads / all) : 0);
  }

  value(start: number, end: number): number {
    const goods = (this.goods[end] - this.goods[start]) / this.totalGoods;
    const bads = (this.bads[end] - this.bads[start]) / this.totalBads;
    return (goods - bads) * this.woe(start, end);
  }
}

function cumulated(name: string, counts: ArrayLike<number>, classes: number): Float64Array {
  if (counts.length !== classes) {
    throw new NumericError('length-mismatch', `${name} has ${counts.length} fine classes where ${classes} are expected.`, {
      name,
    });
  }
  requireFinite(name, counts);
  const sums = new Float64Array(classes + 1);
  for (let i = 0; i < classes; i++) {
    requireThat(counts[i] >= 0, name, `fine class ${i} has a negative count.`);
    sums[i + 1] = sums[i] + counts[i];
  }
  return sums;
}

interface State {
  readonly start: number;
  readonly end: number;
  readonly woe: number;
  /** Part of the trend this bin belongs to: 0 before the turn, 1 after it. */
  readonly part: 0 | 1;
  readonly value: number;
  readonly previous: State | null;
}

/** Direction of a part: 1 rising, -1 falling, 0 free. */
function directions(trend: Constraints['trend']): readonly [number, number] {
  if (trend === 'rising') return [1, 1];
  if (trend === 'falling') return [-1, -1];
  if (trend === 'one-peak') return [1, -1];
  return trend === 'one-valley' ? [-1, 1] : [0, 0];
}

function bestCuts(table: BinTable, constraints: Constraints): number[] {
  const { classes } = table;
  const way = directions(constraints.trend);
  const turning = way[0] !== way[1];
  const fits = (from: State, woe: number, direction: number): boolean => {
    const step = woe - from.woe;
    if (Math.abs(step) < constraints.smallestDifference) return false;
    return direction === 0 || step * direction >= 0;
  };
  // Bins by their end, for the number of bins counted so far.
  let layer: State[][] = Array.from({ length: classes + 1 }, () => []);
  for (let end = 1; end <= classes; end++) {
    if (table.allowed(0, end))
      layer[end].push({ start: 0, end, woe: table.woe(0, end), part: 0, value: table.worth(0, end), previous: null });
  }
  let best: State | null = layer[classes][0] ?? null;
  for (let bins = 2; bins <= constraints.mostBins; bins++) {
    const next: State[][] = Array.from({ length: classes + 1 }, () => []);
    for (let start = 1; start < classes; start++) {
      if (layer[start].length === 0) continue;
      for (let end = start + 1; end <= classes; end++) {
        if (!table.allowed(start, end)) continue;
        const woe = table.woe(start, end);
        const value = table.worth(start, end);
        for (const part of turning ? ([0, 1] as const) : ([0] as const)) {
          let from: State | null = null;
          for (const state of layer[start]) {
            if (state.part > part || (from && state.value <= from.value)) continue;
            if (fits(state, woe, way[part])) from = state;
          }
          if (from) next[end].push({ start, end, woe, part, value: from.value + value, previous: from });
        }
      }
    }
    for (const state of next[classes]) {
      // More bins must earn their place: equal values differ by rounding only.
      if (!best || state.value > best.value + 1e-12 * Math.abs(best.value)) best = state;
    }
    layer = next;
  }
  const cuts: number[] = [];
  for (let state = best; state?.previous; state = state.previous) cuts.unshift(state.start);
  return cuts;
}
