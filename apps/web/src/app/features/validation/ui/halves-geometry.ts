import type { HalvesRow } from '@tallystone/contracts/validation/schema';

/** Where one row of the two halves is drawn. */
export interface HalvesPlace {
  readonly y: number;
  readonly meets: boolean;
}

export interface HalvesLayout {
  readonly width: number;
  readonly narrow: boolean;
  readonly rowHeight: number;
  readonly top: number;
  readonly bottom: number;
  readonly height: number;
  /** Where the split runs; the right half begins `gap` further. */
  readonly split: number;
  readonly gap: number;
  readonly rows: readonly HalvesPlace[];
}

const tooth = 9;
/** How far the validator's edge stands off where a number does not meet. */
export const standOff = 16;

/** One row a number. The split lies where labels on the left and words on the right have room. */
export function halvesLayout(rows: readonly Pick<HalvesRow, 'meets'>[], width: number): HalvesLayout {
  const narrow = width < 620;
  const rowHeight = narrow ? 48 : 34;
  const top = 1;
  const bottom = top + 12 + rows.length * rowHeight;
  return {
    width,
    narrow,
    rowHeight,
    top,
    bottom,
    height: bottom + 2,
    split: Math.round(width * (narrow ? 0.5 : 0.54)),
    gap: 3,
    rows: rows.map(({ meets }, i) => ({ y: top + 6 + (i + 0.5) * rowHeight, meets })),
  };
}

/** The modeller's half: a plain stick on the left with a tooth at each number on the split side. */
export function modellersHalf({ top, bottom, split, rows }: HalvesLayout): string {
  const edge = rows.map(({ y }) => `V${y - tooth}l${tooth} ${tooth}l${-tooth} ${tooth}`).join('');
  return `M1 ${top}H${split}${edge}V${bottom}H1Z`;
}

/**
 * The validator's half: its notches take the teeth where the numbers meet. Where one does not, the edge stands off by `standOff` and its
 * notch lies off the tooth, so that it can be seen without colour too.
 */
export function validatorsHalf({ top, bottom, split, gap, width, rows, rowHeight }: HalvesLayout): string {
  const x = split + gap;
  const edge = rows
    .map(({ y, meets }) => {
      if (meets) return `V${y - tooth}l${tooth} ${tooth}l${-tooth} ${tooth}`;
      const half = rowHeight / 2 - 2;
      return `V${y - half}h${standOff}V${y - tooth + 7}l${tooth} ${tooth}l${-tooth} ${tooth}V${y + half}h${-standOff}`;
    })
    .join('');
  return `M${width - 1} ${top}H${x}${edge}V${bottom}H${width - 1}Z`;
}

/** The gap that opens at a number that does not meet: drawn over both edges, in ochre. */
export function openingAt({ split, gap, rowHeight }: HalvesLayout, { y }: HalvesPlace): string {
  const half = rowHeight / 2 - 2;
  const x = split + gap + standOff;
  return `M${split} ${y - half}V${y - tooth}l${tooth} ${tooth}l${-tooth} ${tooth}V${y + half}M${x} ${y - half}V${y - tooth + 7}l${tooth} ${tooth}l${-tooth} ${tooth}V${y + half}`;
}
