import { NumericError } from '../errors';
import type { BinKind, Bins, FineClasses, SlotCounts } from './types';

/** How many slots are fine classes (numeric) or categories; the special codes, missing and unseen come after them. */
export function classCount(fine: FineClasses): number {
  return fine.kind === 'numeric' ? fine.edges.length + 1 : fine.categories.length;
}

export function slotCount(fine: FineClasses): number {
  return classCount(fine) + fine.special.length + 1 + (fine.kind === 'categorical' ? 1 : 0);
}

/** Bins made by cuts or groups, before those of special codes and missing. */
export function coarseCount(bins: Bins): number {
  return bins.kind === 'numeric' ? bins.edges.length + 1 : bins.groups.length;
}

export interface BinLayout {
  readonly kind: BinKind;
  /** Index of the cut bin or group; of the special code for "special"; 0 for "missing". */
  readonly index: number;
}

/** The bins in a specification's order: cuts ascending or groups as listed, then own special bins as listed, then missing if own. */
export function layoutOf(bins: Bins): BinLayout[] {
  const kind = bins.kind === 'numeric' ? 'cut' : 'group';
  const layout: BinLayout[] = Array.from({ length: coarseCount(bins) }, (_, index) => ({ kind, index }));
  bins.special.forEach((place, index) => {
    if (place === 'own') layout.push({ kind: 'special', index });
  });
  if (bins.missing === 'own') layout.push({ kind: 'missing', index: 0 });
  return layout;
}

/**
 * The bin of each slot, -1 where a slot is in no bin (unseen categories that stay neutral).
 * @throws NumericError "infeasible" where a cut lies on no fine edge: the fine class must be split first
 */
export function binOfSlots(fine: FineClasses, bins: Bins): Int16Array {
  const slots = new Int16Array(slotCount(fine)).fill(-1);
  const classes = classCount(fine);
  if (bins.kind === 'numeric') {
    let next = 0;
    for (let slot = 0; slot < classes; slot++) {
      while (next < bins.edges.length && slot > 0 && bins.edges[next] <= fine.edges[slot - 1]) {
        if (bins.edges[next] !== fine.edges[slot - 1]) throw offEdge(bins.edges[next]);
        next++;
      }
      slots[slot] = next;
    }
    if (next < bins.edges.length) throw offEdge(bins.edges[next]);
  } else {
    const places = new Map<string, number>();
    bins.groups.forEach((group, index) => group.forEach((category) => places.set(category, index)));
    fine.categories.forEach((category, slot) => (slots[slot] = places.get(category) ?? -1));
  }
  const coarse = coarseCount(bins);
  let own = coarse;
  bins.special.forEach((place, index) => (slots[classes + index] = place === 'own' ? own++ : place));
  slots[classes + fine.special.length] = bins.missing === 'own' ? own : bins.missing;
  if (bins.kind === 'categorical' && bins.unseen !== 'neutral') slots[slots.length - 1] = bins.unseen;
  return slots;
}

function offEdge(edge: number): NumericError {
  return new NumericError('infeasible', `The cut at ${edge} lies inside a fine class, whose rows cannot be told apart.`, {
    edge,
  });
}

export interface BinSums {
  readonly rows: Float64Array;
  readonly goods: Float64Array;
  readonly bads: Float64Array;
  /** Rows in no bin. */
  readonly outside: number;
}

/** Counts of each bin of a partition. */
export function sumSlots(counts: SlotCounts, slots: Int16Array, bins: number): BinSums {
  const rows = new Float64Array(bins);
  const goods = new Float64Array(bins);
  const bads = new Float64Array(bins);
  let outside = 0;
  for (let slot = 0; slot < slots.length; slot++) {
    const bin = slots[slot];
    if (bin < 0) {
      outside += counts.rows[slot];
      continue;
    }
    rows[bin] += counts.rows[slot];
    goods[bin] += counts.goods[slot];
    bads[bin] += counts.bads[slot];
  }
  return { rows, goods, bads, outside };
}
