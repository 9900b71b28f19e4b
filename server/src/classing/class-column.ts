import type { AskedConstraints, Bins, Constraints, Fine, SlotCounts } from '@tallystone/contracts/binnings/bins';
import type { MonthlyCounts } from '@tallystone/contracts/binnings/months';
import type { BinnedCharacteristic, DataReading } from '@tallystone/contracts/specification/types';
import { type CarriedStep, type EarlierEdits, carriedEdges, carryEdits } from '@tallystone/numeric/bench';
import { ReplayError } from '../replay/problems';
import type { RowMonths } from '../replay/row-months';
import type { SourceColumn } from '../replay/source';
import type { Task } from '../threads/task';
import { type Summarised, classFine, summarise } from './automatic';
import { automaticClassing, withBins } from './definition';
import { type CountedMonths, countMonths } from './months';
import {
  type CountedRows,
  type DefinedCharacteristic,
  type FineClassing,
  TooManyCategories,
  fineClasses,
  fineEntry,
  mostFineEdges,
  slotsOfTexts,
  splitFineClasses,
  tallyColumn,
} from './fine-classes';

export interface ClassColumn {
  readonly defined: DefinedCharacteristic;
  readonly column: SourceColumn;
  readonly data: DataReading;
  /** Arrays over shared memory are not copied from thread to thread. */
  readonly counted: CountedRows;
  readonly constraints: AskedConstraints;
  /** Edits of an earlier binning, to be made again where they make sense; null where there are none. */
  readonly earlier?: EarlierEdits | null;
  /** When each row applied; null where the sample does not say. */
  readonly months: RowMonths | null;
}

export interface ClassedColumn extends Summarised {
  readonly definition: BinnedCharacteristic;
  readonly automatic: Bins;
  readonly constraints: Constraints;
  readonly fine: Fine;
  readonly outOfTime: SlotCounts;
  readonly months: CountedMonths | null;
  /** What became of each earlier edit. */
  readonly carried: readonly CarriedStep[];
}

const sourceOfOne = (defined: DefinedCharacteristic, column: SourceColumn, rows: number) => ({
  rows,
  column: (name: string): SourceColumn | undefined => (name === defined.column ? column : undefined),
});

/** Classes one characteristic from its column. `unusable` says why a column cannot be classed at all. */
export const classColumn: Task<ClassColumn, ClassedColumn | { readonly unusable: string }> = ({
  defined,
  column,
  data,
  counted,
  constraints: asked,
  earlier = null,
  months: rowMonths,
}) => {
  try {
    const source = sourceOfOne(defined, column, counted.rows);
    const tallied = tallyColumn(defined, source, counted);
    const counts = fineClasses(defined, source, data, counted, tallied, asked.fineClasses);
    if (counts.fine.kind === 'categorical' && counts.fine.categories.length === 0)
      return { unusable: 'No development row has a value.' };
    const { bins: automatic, constraints } = classFine(counts.fine, asked);
    // Cuts of earlier edits lie where they lay: the fine classes are split there, after the automatic bins have been found without them.
    const more = carriedEdges(counts.fine, earlier?.edits ?? []).slice(0, Math.max(0, mostFineEdges(defined.special.length) - counts.fine.edges.length));
    const { fine, outOfTime, slotOf } =
      more.length > 0 ? splitFineClasses(defined, source, data, counted, tallied, counts.fine, more) : counts;
    const { bins, steps } = carryEdits(fine, automatic, earlier);
    const current = bins as Bins;
    const months = rowMonths && countMonths(tallied && tallied.column, slotOf, counted, fine, rowMonths);
    const classing = steps.some(({ kept }) => kept) ? ({ made: 'by hand' } as const) : automaticClassing(constraints);
    const definition = withBins(fineEntry(defined, fine), current, classing, fine.pooled);
    return {
      definition,
      automatic,
      constraints,
      fine,
      outOfTime,
      months,
      carried: steps,
      ...summarise({ fine, outOfTime, months: months?.counts ?? null }, current, constraints),
    };
  } catch (error) {
    if (error instanceof TooManyCategories || error instanceof ReplayError) return { unusable: error.message };
    throw error;
  }
};

export interface SplitColumn extends Omit<ClassColumn, 'constraints'> {
  readonly fine: Fine;
  readonly edge: number;
}

/** Counts a column's fine classes anew with one more edge, by month too. */
export const splitColumn: Task<SplitColumn, FineClassing & { readonly months: CountedMonths | null }> = ({
  defined,
  column,
  data,
  counted,
  fine,
  edge,
  months,
}) => {
  const source = sourceOfOne(defined, column, counted.rows);
  const tallied = tallyColumn(defined, source, counted);
  const { slotOf, ...split } = splitFineClasses(defined, source, data, counted, tallied, fine, [edge]);
  return { ...split, months: months && countMonths(tallied && tallied.column, slotOf, counted, split.fine, months) };
};

/** Counts the fine classes that a column has by month. */
export const countColumnMonths: Task<Omit<SplitColumn, 'edge' | 'months'> & { readonly months: RowMonths }, CountedMonths> = ({
  defined,
  column,
  data,
  counted,
  fine,
  months,
}) => {
  const source = sourceOfOne(defined, column, counted.rows);
  const tallied = tallyColumn(defined, source, counted);
  const slotOf = tallied && slotsOfTexts(defined, tallied, data, counted, source, fine);
  return countMonths(tallied && tallied.column, slotOf, counted, fine, months);
};

export interface ReclassFine {
  readonly characteristics: readonly {
    readonly fine: Fine;
    readonly outOfTime: SlotCounts;
    readonly months: MonthlyCounts | null | undefined;
    readonly constraints: AskedConstraints;
  }[];
}

/** Classes characteristics anew from fine classes that are already counted. */
export const reclassFine: Task<ReclassFine, ({ readonly automatic: Bins; readonly constraints: Constraints } & Summarised)[]> = (
  { characteristics },
  { cancelled, progress },
) =>
  characteristics.map(({ fine, outOfTime, months, constraints: asked }, index) => {
    if (cancelled()) throw new Error('Cancelled');
    progress('Classing', index / characteristics.length);
    const { bins: automatic, constraints } = classFine(fine, asked);
    return { automatic, constraints, ...summarise({ fine, outOfTime, months }, automatic, constraints) };
  });
