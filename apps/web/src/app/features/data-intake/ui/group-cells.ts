import type { ColumnQualityDetail } from '@tallystone/contracts/samples/quality';
import { binWords, share } from '../../../ui/numbers';

/** Rows of one group in one month. */
export interface GroupCell {
  /** Place of the group in the report. */
  readonly place: number;
  readonly group: string;
  readonly month: string;
  readonly rows: number;
  /** Of the month's rows, from 0 to 1; 0 in a month without rows. */
  readonly share: number;
  /** Rows of the whole month. */
  readonly ofMonth: number;
}

/** Below this a month says little about its shares. Common practice. */
export const fewestRows = 30;

/** Every group in every month, group by group. */
export function groupCells({ groups, months }: Pick<ColumnQualityDetail, 'groups' | 'months'>): GroupCell[] {
  return groups.flatMap(({ label }, place) =>
    months.map(({ month, rows: ofMonth, groups: counts }) => ({
      place,
      group: label,
      month,
      rows: counts[place],
      share: ofMonth === 0 ? 0 : counts[place] / ofMonth,
      ofMonth,
    })),
  );
}

/** The group whose share of a month's rows moves most, with its least and its largest month, among months of at least 30 rows; null with fewer than two. */
export function widestMove(cells: readonly GroupCell[]): { group: string; least: GroupCell; most: GroupCell } | null {
  const readable = cells.filter(({ ofMonth }) => ofMonth >= fewestRows);
  if (new Set(readable.map(({ month }) => month)).size < 2) return null;
  const ends = new Map<number, { least: GroupCell; most: GroupCell }>();
  for (const cell of readable) {
    const seen = ends.get(cell.place) ?? { least: cell, most: cell };
    ends.set(cell.place, {
      least: cell.share < seen.least.share ? cell : seen.least,
      most: cell.share > seen.most.share ? cell : seen.most,
    });
  }
  const [widest] = [...ends.values()].sort((a, b) => b.most.share - b.least.share - (a.most.share - a.least.share));
  return { group: widest.least.group, ...widest };
}

/** That move in a sentence. */
export function moveFinding(cells: readonly GroupCell[]): string {
  const move = widestMove(cells);
  if (!move) return 'Too few rows by month to tell how the values move.';
  const { group, least, most } = move;
  if (least.share === most.share) return 'The shares of the values are the same in every month.';
  return `${binWords(group)} moves most: from ${share(least.share, 1)} of the rows (${least.month}) to ${share(most.share, 1)} (${most.month}).`;
}
