import { classCount, coarseCount, riskOrder, type BenchReading, type Bins, type FineClasses } from '@tallystone/numeric/bench';
import { scaleLinear, type ScaleLinear } from 'd3-scale';
import { binWords } from '../../../ui/numbers';

/** Where everything of the binning figure stands, in pixels: pure, so that it can be tested without drawing. */

export const sizes = {
  left: 112,
  right: 8,
  top: 16,
  goods: 150,
  bads: 70,
  /** From the bads to the axis of values. */
  gap: 14,
  axis: 34,
  /** Ticks of values under the cuts, and the word before them. */
  values: 26,
  valueWord: 44,
  ladder: 150,
  ladderGap: 22,
  /** A special code, missing or unseen categories. */
  slot: 62,
  slotGap: 22,
} as const;

/** value: along the values; rows: every fine class equally wide, so that bins are about as wide as they have rows. */
export type AxisMode = 'value' | 'rows';

export interface DrawnClass {
  readonly slot: number;
  readonly label: string;
  readonly x: number;
  readonly width: number;
  readonly goods: number;
  readonly bads: number;
  /** Taller than the figure: drawn with a break. */
  readonly cut: boolean;
}

export interface DrawnBin {
  /** Index in the reading; null for a slot whose rows count in another bin. */
  readonly bin: number | null;
  readonly label: string;
  readonly x0: number;
  readonly x1: number;
}

export interface DrawnCut {
  readonly cut: number;
  readonly edge: number;
  readonly x: number;
}

export interface Geometry {
  readonly width: number;
  readonly classes: readonly DrawnClass[];
  /** Every column of the figure from left to right, slots of special codes and missing at the end. */
  readonly columns: readonly DrawnBin[];
  readonly cuts: readonly DrawnCut[];
  /** From and to of the axis of values. */
  readonly axis: readonly [number, number];
  /** Where each fine edge stands: the places a cut can be dragged to. */
  readonly edges: readonly { readonly edge: number; readonly x: number }[];
  /** From values to places; null where fine classes stand side by side. */
  readonly values: ScaleLinear<number, number> | null;
  /** Bads are drawn this many times as high as goods. */
  readonly badsTimes: number;
  readonly baseline: number;
}

/** Categories from left to right: groups as they stand, the least risky category of a group first. */
export function categoryOrder(fine: FineClasses, bins: Bins): number[] {
  if (bins.kind !== 'categorical') return [];
  const places = new Map(fine.categories.map((category, slot) => [category, slot]));
  return bins.groups.flatMap((group) =>
    riskOrder(
      fine,
      group.map((category) => [category]),
    ).map((index) => places.get(group[index]) ?? 0),
  );
}

/** The narrowest drawing in which nothing collides. */
export function leastWidth(fine: FineClasses): number {
  const slots = (fine.special.length + 1) * sizes.slot + sizes.slotGap;
  const classes = fine.kind === 'categorical' ? Math.max(300, fine.categories.length * 34) : 420;
  return sizes.left + classes + slots + sizes.right;
}

export function layOut(fine: FineClasses, bins: Bins, reading: BenchReading, wanted: number, mode: AxisMode): Geometry {
  const width = Math.max(wanted, leastWidth(fine));
  const classes = classCount(fine);
  const extras = extraSlots(fine, reading);
  const end = width - sizes.right - extras.length * sizes.slot - (extras.length > 0 ? sizes.slotGap : 0);
  const axis: [number, number] = [sizes.left, end];
  const values = fine.kind === 'numeric' && mode === 'value' ? valueScale(fine, axis) : null;
  const bounds = fine.kind === 'numeric' ? numericBounds(fine, axis, values) : null;
  const order = fine.kind === 'numeric' ? null : categoryOrder(fine, bins);
  const step = (end - sizes.left) / Math.max(1, classes);
  const place = (slot: number): [number, number] => {
    if (bounds) return [bounds[slot], bounds[slot + 1]];
    const at = order?.indexOf(slot) ?? 0;
    return [sizes.left + at * step, sizes.left + (at + 1) * step];
  };
  const boxes = Array.from({ length: classes }, (_, slot) => ({ slot, label: classLabel(fine, slot), span: place(slot) }));
  extras.forEach(({ slot, label }, index) => {
    const x = end + sizes.slotGap + index * sizes.slot;
    boxes.push({ slot, label, span: [x + 10, x + sizes.slot - 10] });
  });
  const { drawn, badsTimes } = heights(fine, boxes);
  return {
    width,
    classes: drawn,
    columns: columnsOf(fine, bins, reading, { axis, extras, bounds, order, step }),
    cuts:
      bins.kind === 'numeric' && bounds
        ? bins.edges.map((edge, cut) => ({ cut, edge, x: bounds[fine.edges.indexOf(edge) + 1] }))
        : [],
    axis,
    edges: bounds ? fine.edges.map((edge, index) => ({ edge, x: bounds[index + 1] })) : [],
    values,
    badsTimes,
    baseline: sizes.top + sizes.goods,
  };
}

/** Extents of log odds over everything that is drawn in the ladder. */
export function ladderScale(reading: BenchReading, top: number): ScaleLinear<number, number> {
  const values: number[] = [];
  for (const { figures } of reading.bins) {
    for (const one of Object.values(figures)) if (one?.logOdds !== null && one?.logOdds !== undefined) values.push(one.logOdds);
    const development = figures.development;
    if (development)
      values.push(
        ...[development.logOddsLower, development.logOddsUpper].filter(
          (bound): bound is number => bound !== null && Number.isFinite(bound),
        ),
      );
  }
  const low = values.length > 0 ? Math.min(...values) : 0;
  const high = values.length > 0 ? Math.max(...values) : 1;
  const pad = Math.max(0.1, (high - low) * 0.06);
  return scaleLinear()
    .domain([low - pad, high + pad])
    .range([top + sizes.ladder, top]);
}

interface Extra {
  readonly slot: number;
  readonly label: string;
}

/** Special codes and missing always have their slot where anybody has them; unseen categories where a later partition has some. */
function extraSlots(fine: FineClasses, reading: BenchReading): Extra[] {
  const classes = classCount(fine);
  const rows = (slot: number): number =>
    fine.development.rows[slot] + fine.holdOut.rows[slot] + (fine.outOfTime?.rows[slot] ?? 0);
  const own = new Set(
    reading.bins.flatMap(({ kind, index }) =>
      kind === 'special' ? [classes + index] : kind === 'missing' ? [classes + fine.special.length] : [],
    ),
  );
  const slots = [...fine.special, 'missing'].map((label, index) => ({ slot: classes + index, label }));
  return slots.filter(({ slot }) => rows(slot) > 0 || (own.has(slot) && slot < classes + fine.special.length));
}

/** Pixel bounds of fine classes: one more than there are classes. */
function numericBounds(
  fine: FineClasses,
  [from, to]: readonly [number, number],
  values: ScaleLinear<number, number> | null,
): number[] {
  const classes = classCount(fine);
  if (!values) return Array.from({ length: classes + 1 }, (_, index) => from + ((to - from) * index) / classes);
  return [from, ...fine.edges.map((edge) => values(edge)), to];
}

/** The axis of values; null where there are too few fine edges to make one. */
function valueScale(fine: FineClasses, [from, to]: readonly [number, number]): ScaleLinear<number, number> | null {
  if (fine.edges.length < 2 || !fine.range) return null;
  const first = fine.edges[0];
  const last = fine.edges[fine.edges.length - 1];
  // A few extreme values must not squeeze all others together: the outermost classes are at most a tenth of the rest wide.
  const reach = (last - first) * 0.1;
  return scaleLinear()
    .domain([Math.max(fine.range[0], first - reach), Math.min(fine.range[1], last + reach)])
    .range([from, to]);
}

function heights(
  fine: FineClasses,
  boxes: readonly { slot: number; label: string; span: [number, number] }[],
): { drawn: DrawnClass[]; badsTimes: number } {
  const { goods, bads } = fine.development;
  const widthOf = ([from, to]: [number, number]): number => Math.max(0.5, to - from);
  // Bars have the area of their count, so that classes of different width can be compared.
  const density = boxes.map(({ slot, span }) => ({ goods: goods[slot] / widthOf(span), bads: bads[slot] / widthOf(span) }));
  const cap = (values: number[]): number => {
    const sorted = values.filter((value) => value > 0).sort((a, b) => a - b);
    if (sorted.length === 0) return 1;
    // One heap (a round number that many give) may be broken off rather than flatten the rest.
    const usual = sorted[Math.floor((sorted.length - 1) * 0.9)];
    return Math.min(sorted[sorted.length - 1], usual * 1.8);
  };
  const most = { goods: cap(density.map((one) => one.goods)), bads: cap(density.map((one) => one.bads)) };
  const scale = sizes.goods / most.goods;
  const badsTimes = [20, 10, 5, 2, 1].find((times) => most.bads * scale * times <= sizes.bads) ?? 1;
  return {
    badsTimes,
    drawn: boxes.map(({ slot, label, span: [from, to] }, index) => {
      const tall = { goods: density[index].goods * scale, bads: density[index].bads * scale * badsTimes };
      const thin = to - from > 3 ? 1 : 0;
      return {
        slot,
        label,
        x: from,
        width: Math.max(0.5, to - from - thin),
        goods: Math.min(tall.goods, sizes.goods),
        bads: Math.min(tall.bads, sizes.bads),
        cut: tall.goods > sizes.goods * 1.001 || tall.bads > sizes.bads * 1.001,
      };
    }),
  };
}

function columnsOf(
  fine: FineClasses,
  bins: Bins,
  reading: BenchReading,
  {
    axis,
    extras,
    bounds,
    order,
    step,
  }: { axis: [number, number]; extras: readonly Extra[]; bounds: number[] | null; order: number[] | null; step: number },
): DrawnBin[] {
  const columns: DrawnBin[] = [];
  const coarse = coarseCount(bins);
  let x = axis[0];
  for (let bin = 0; bin < coarse; bin++) {
    let x1: number;
    if (bins.kind === 'numeric')
      x1 = bin === coarse - 1 ? axis[1] : (bounds?.[fine.edges.indexOf(bins.edges[bin]) + 1] ?? axis[1]);
    else x1 = x + bins.groups[bin].filter((category) => order !== null && fine.categories.includes(category)).length * step;
    columns.push({ bin, label: binWords(reading.bins[bin].label), x0: x, x1 });
    x = x1;
  }
  const classes = classCount(fine);
  extras.forEach(({ slot, label }, index) => {
    const from = axis[1] + sizes.slotGap + index * sizes.slot;
    const bin = reading.bins.findIndex(({ kind, index: code }) =>
      kind === 'missing' ? slot === classes + fine.special.length : kind === 'special' && slot === classes + code,
    );
    columns.push({ bin: bin < 0 ? null : bin, label, x0: from, x1: from + sizes.slot });
  });
  return columns;
}

function classLabel(fine: FineClasses, slot: number): string {
  if (fine.kind === 'categorical') return fine.categories[slot];
  const { edges } = fine;
  if (edges.length === 0) return 'all values';
  if (slot === 0) return `under ${edges[0]}`;
  return slot === edges.length ? `${edges[slot - 1]} and over` : `${edges[slot - 1]} to ${edges[slot]}`;
}

/** The axis of values as a line with a notch at each cut: V-shaped, down from y. */
export function notchedLine([from, to]: readonly [number, number], cuts: readonly { readonly x: number }[], y: number): string {
  const depth = 11;
  const half = 8;
  let path = `M${from} ${y}`;
  for (const { x } of cuts) path += `H${Math.max(from, x - half)}L${x} ${y + depth}L${Math.min(to, x + half)} ${y}`;
  return `${path}H${to}`;
}

/** Which of the labels under the notches have room, the selected one first. */
export function shownLabels(cuts: readonly DrawnCut[], selected: number | null): ReadonlySet<number> {
  const room = 44;
  const shown = new Set<number>();
  const taken: number[] = [];
  const order = [...cuts].sort((a, b) => Number(b.cut === selected) - Number(a.cut === selected) || a.cut - b.cut);
  for (const { cut, x } of order) {
    if (taken.some((other) => Math.abs(other - x) < room)) continue;
    taken.push(x);
    shown.add(cut);
  }
  return shown;
}
