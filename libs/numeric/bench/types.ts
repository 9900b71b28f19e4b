/** Shapes of one characteristic on the bench: fine classes with their counts, and the bins that are made of them. */

/** Goods and bads weighted, rows counted; one entry per slot. */
export interface SlotCounts {
  readonly rows: readonly number[];
  readonly goods: readonly number[];
  readonly bads: readonly number[];
}

/**
 * Fine classes of a characteristic. Slots, in order: the fine classes (numeric: edges + 1; categorical: one per category), one per special
 * code, missing, and for a categorical characteristic the categories that development has not seen.
 */
export interface FineClasses {
  readonly kind: 'numeric' | 'categorical';
  /** Ascending; empty for a categorical characteristic. */
  readonly edges: readonly number[];
  readonly closed: 'left' | 'right';
  /** Smallest and largest known value of development; null without any. */
  readonly range: readonly [number, number] | null;
  readonly categories: readonly string[];
  /** The rarest categories, classed as one under a name that stands last among `categories`; left out where every category stands for itself. */
  readonly pooled?: { readonly name: string; readonly categories: readonly string[] } | undefined;
  /** Labels of the special codes. */
  readonly special: readonly string[];
  readonly development: SlotCounts;
  readonly holdOut: SlotCounts;
  /** Null while covered. */
  readonly outOfTime: SlotCounts | null;
}

/** "own", or the index of a bin of the cuts or groups to join. */
export type Place = 'own' | number;

export interface NumericBins {
  readonly kind: 'numeric';
  readonly edges: readonly number[];
  readonly special: readonly Place[];
  readonly missing: Place;
}

export interface CategoricalBins {
  readonly kind: 'categorical';
  readonly groups: readonly (readonly string[])[];
  readonly special: readonly Place[];
  readonly missing: Place;
  readonly unseen: 'neutral' | number;
}

export type Bins = NumericBins | CategoricalBins;

export type BinKind = 'cut' | 'group' | 'special' | 'missing';
export const partitions = ['development', 'holdOut', 'outOfTime'] as const;
export type PartitionName = (typeof partitions)[number];
