import { z } from 'zod';

/** What classing decides about one characteristic and what an edit changes; the rest of a specification entry stays as it is. */

const finite = z.number();
const joined = z.union([z.literal('own'), z.int().min(0).max(249)]);

export const NumericBins = z.strictObject({
  kind: z.literal('numeric'),
  /** Cuts, strictly ascending. */
  edges: z.array(finite).max(249),
  /** Where each special code goes, in the order of the sample definition: a bin of its own, or the index of a bin of the cuts. */
  special: z.array(joined).max(50),
  missing: joined,
});

export const CategoricalBins = z.strictObject({
  kind: z.literal('categorical'),
  groups: z.array(z.array(z.string()).min(1)).min(1).max(250),
  special: z.array(joined).max(50),
  missing: joined,
  /** Where a category goes that development has not seen. */
  unseen: z.union([z.literal('neutral'), z.int().min(0).max(249)]),
});

export const Bins = z.discriminatedUnion('kind', [NumericBins, CategoricalBins]);
export type NumericBins = z.infer<typeof NumericBins>;
export type CategoricalBins = z.infer<typeof CategoricalBins>;
export type Bins = z.infer<typeof Bins>;

/** Limits under which automatic classing works. The names are those of a specification's `classing`. */
export const Constraints = z.strictObject({
  /** Fine classes of a numeric characteristic, before any is merged. */
  fineClasses: z.int().min(2).max(200, 'At most 200 fine classes').default(100),
  /** Of development rows with a known value. */
  smallestShare: finite.min(0).max(0.5, 'At most a half').default(0.05),
  smallestGoods: finite.min(0).max(1_000_000).default(20),
  smallestBads: finite.min(0).max(1_000_000).default(20),
  mostBins: z.int().min(1, 'At least 1').max(50, 'At most 50 bins').default(8),
  /** Of WOE between neighbours. */
  smallestDifference: finite.min(0).max(5).default(0.05),
  /** Of WOE along the value axis: "rising" is falling risk. */
  trend: z.enum(['any', 'rising', 'falling', 'one-peak', 'one-valley']).default('any'),
  /** The trend was chosen by cross-validated deviance, and is chosen again wherever the classing is repeated. */
  trendBy: z.enum(['cross-validation']).optional(),
  /** What is best under the constraints; the largest information value when left out. */
  criterion: z.enum(['information value', 'deviance']).optional(),
});
export type Constraints = z.infer<typeof Constraints>;

/**
 * Constraints as they are asked for. "monotone" is rising or falling, whichever tells more; "cross-validated" is the trend with the smallest
 * cross-validated deviance. Each characteristic then has the one it was classed under, so that the specification names it.
 */
export const AskedConstraints = Constraints.omit({ trendBy: true }).extend({
  trend: z.enum(['monotone', 'cross-validated', 'any', 'rising', 'falling', 'one-peak', 'one-valley']).default('monotone'),
});
export type AskedConstraints = z.infer<typeof AskedConstraints>;

/** Goods and bads weighted, rows counted: one entry per slot (see Fine). Only rows with a good or bad outcome. */
export const SlotCounts = z.object({
  rows: z.array(finite),
  goods: z.array(finite),
  bads: z.array(finite),
  /** How many of the rows are bad. Left out without weights, where `bads` says it, and where fine classes were counted before this was. */
  badRows: z.array(finite).optional(),
});
export type SlotCounts = z.infer<typeof SlotCounts>;

/**
 * Fine classes of a characteristic with their counts: everything that a bench needs to recalculate without the rows. Slots, in order: the
 * fine classes (numeric: edges + 1 of them; categorical: one per category), one per special code, missing, and for a categorical
 * characteristic those that development has not seen.
 */
export const Fine = z.object({
  kind: z.enum(['numeric', 'categorical']),
  /** Ascending; empty for a categorical characteristic. */
  edges: z.array(finite),
  /** Those of `edges` that a cut by hand put inside a fine class: automatic classing does without them, so that it can be repeated. Left out without any. */
  splits: z.array(finite).optional(),
  closed: z.enum(['left', 'right']),
  /** Smallest and largest known value of development; null without any. */
  range: z.tuple([finite, finite]).nullable(),
  /** Categories of development by falling number of rows; empty for a numeric characteristic. */
  categories: z.array(z.string()),
  /**
   * Where there are more categories than a bench can tell apart: the rarest of them, classed as one. `name` stands for all of them, last among
   * `categories` and in bins; a specification lists each. Left out where every category stands for itself.
   */
  pooled: z.object({ name: z.string(), categories: z.array(z.string()) }).optional(),
  /** Labels of the special codes. */
  special: z.array(z.string()),
  development: SlotCounts,
  holdOut: SlotCounts,
  /** Null while covered. */
  outOfTime: SlotCounts.nullable(),
});
export type Fine = z.infer<typeof Fine>;
