import { auc, delong, kolmogorovSmirnov, pairedDelong } from '@tallystone/numeric';
import { type IncumbentFigures, fewestInSegment } from '@tallystone/contracts/comparison/schema';
import type { PartitionName } from '@tallystone/contracts/result/types';
import type { DataReading } from '@tallystone/contracts/specification/types';
import { Columns } from '../replay/columns';
import { gather, gatherNumbers } from '../replay/gather';
import type { SourceColumn } from '../replay/source';

/** What fits are held against besides each other: scores that exist already, and segments of the hold-out. */

/** Columns of the sample by name, with how their texts are read. */
export interface OtherColumns {
  readonly data: DataReading;
  readonly rows: number;
  readonly incumbents: ReadonlyMap<string, SourceColumn>;
  readonly segments: ReadonlyMap<string, SourceColumn>;
}

/** One fit's linear predictor on the rows of a partition. */
export interface ScoredRows {
  readonly eta: Float64Array;
  readonly outcome: Uint8Array;
  readonly rows: Uint32Array;
}

type Figures = Omit<IncumbentFigures, 'tests'> & { readonly tests: Omit<IncumbentFigures['tests'][number], 'fitId'>[] };

/**
 * An incumbent score on the rows that have one, and every fit against it on the same rows. On development there is no p-value: the fits have seen its
 * outcomes. Null without goods or bads.
 */
export function incumbentFigures(name: string, { data, rows, incumbents }: OtherColumns, fits: readonly ScoredRows[], partition: PartitionName): Figures | null {
  const values = new Columns({ rows, column: (wanted) => incumbents.get(wanted) }, data).numbers(name);
  const [first] = fits;
  if (values === null) return null;
  const present: number[] = [];
  first.rows.forEach((row, place) => {
    if (!Number.isNaN(values.number(row))) present.push(place);
  });
  const outcome = gather(first.outcome, present);
  if (!outcome.includes(0) || !outcome.includes(1)) return null;
  const score = Float64Array.from(present, (place) => values.number(first.rows[place]));
  const area = delong(score, outcome);
  const tested = partition !== 'development';
  return {
    rows: outcome.length,
    missing: first.rows.length - outcome.length,
    bads: outcome.reduce((sum, value) => sum + 1 - value, 0),
    auc: area.auc,
    aucLower: finite(area.lower),
    aucUpper: finite(area.upper),
    ks: kolmogorovSmirnov(score, outcome).ks,
    tests: fits.map(({ eta }) => {
      const test = pairedDelong(gatherNumbers(eta, present), score, outcome);
      const told = (value: number): number | null => (tested ? finite(value) : null);
      return { difference: test.difference, lower: told(test.lower), upper: told(test.upper), pValue: told(test.pValue) };
    }),
  };
}

export interface SegmentFigures {
  readonly column: string;
  readonly value: string;
  readonly rows: number;
  readonly bads: number | null;
  readonly auc: (number | null)[];
}

const mostSegments = 30;

/** Every value of a segment column on the hold-out, the largest first, at most 30. Segments with few goods or bads are counted and not read. */
export function segmentFigures(name: string, { data, rows, segments }: OtherColumns, fits: readonly ScoredRows[]): SegmentFigures[] {
  const columns = new Columns({ rows, column: (wanted) => segments.get(wanted) }, data);
  const column = columns.text(name);
  if (column === null) return [];
  const [first] = fits;
  const places = new Map<string, number[]>();
  first.rows.forEach((row, place) => {
    const text = column.texts[column.codes[row]];
    const value = columns.isMissing(text) ? 'missing' : text;
    const known = places.get(value);
    if (known) known.push(place);
    else places.set(value, [place]);
  });
  return [...places]
    .sort((a, b) => b[1].length - a[1].length || (a[0] < b[0] ? -1 : 1))
    .slice(0, mostSegments)
    .map(([value, taken]) => {
      const outcome = gather(first.outcome, taken);
      const goods = outcome.reduce((sum, one) => sum + one, 0);
      const few = Math.min(goods, outcome.length - goods) < fewestInSegment;
      return {
        column: name,
        value,
        rows: outcome.length,
        bads: few ? null : outcome.length - goods,
        auc: fits.map(({ eta }) => (few ? null : auc(gatherNumbers(eta, taken), outcome))),
      };
    });
}

const finite = (value: number): number | null => (Number.isFinite(value) ? value : null);
