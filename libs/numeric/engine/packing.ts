/** Columns that share one byte: the code of the pack is sum of code times stride. */
export interface Pack {
  /** Numbers of coded columns. */
  readonly members: readonly number[];
  readonly strides: readonly number[];
  readonly codes: number;
}

/**
 * Packs columns so that the product of their numbers of bins stays within `most`: first fit, columns with many bins first.
 * @param bins number of bins of each coded column
 * @example packColumns([5, 9, 6], 256).length // 2: 9 x 6 and 5
 */
export function packColumns(bins: readonly number[], most: number): Pack[] {
  const order = bins.map((_, j) => j).sort((a, b) => bins[b] - bins[a] || a - b);
  const open: { members: number[]; strides: number[]; codes: number }[] = [];
  for (const j of order) {
    let pack = open.find(({ codes }) => codes * bins[j] <= most);
    if (!pack) open.push((pack = { members: [], strides: [], codes: 1 }));
    pack.members.push(j);
    pack.strides.push(pack.codes);
    pack.codes *= bins[j];
  }
  return open;
}
