import type { AskedConstraints, Bins, Constraints, Fine, SlotCounts } from '@tallystone/contracts/binnings/bins';
import type { BinnedCharacteristic, DataReading } from '@tallystone/contracts/specification/types';
import { ReplayError } from '../replay/problems';
import type { SourceColumn } from '../replay/source';
import type { Task } from '../threads/task';
import { type Summarised, classFine, summarise } from './automatic';
import { automaticClassing, withBins } from './definition';
import {
  type CountedRows,
  type DefinedCharacteristic,
  TooManyCategories,
  fineClasses,
  fineEntry,
  splitFineClass,
} from './fine-classes';

export interface ClassColumn {
  readonly defined: DefinedCharacteristic;
  readonly column: SourceColumn;
  readonly data: DataReading;
  /** Arrays over shared memory are not copied from thread to thread. */
  readonly counted: CountedRows;
  readonly constraints: AskedConstraints;
}

export interface ClassedColumn extends Summarised {
  readonly definition: BinnedCharacteristic;
  readonly automatic: Bins;
  readonly constraints: Constraints;
  readonly fine: Fine;
  readonly outOfTime: SlotCounts;
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
}) => {
  try {
    const { fine, outOfTime } = fineClasses(
      defined,
      sourceOfOne(defined, column, counted.rows),
      data,
      counted,
      asked.fineClasses,
    );
    if (fine.kind === 'categorical' && fine.categories.length === 0) return { unusable: 'No development row has a value.' };
    const { bins: automatic, constraints } = classFine(fine, asked);
    const definition = withBins(fineEntry(defined, fine.edges, fine.categories), automatic, automaticClassing(constraints));
    return { definition, automatic, constraints, fine, outOfTime, ...summarise(fine, outOfTime, automatic, constraints) };
  } catch (error) {
    if (error instanceof TooManyCategories || error instanceof ReplayError) return { unusable: error.message };
    throw error;
  }
};

export interface SplitColumn extends Omit<ClassColumn, 'constraints'> {
  readonly fine: Fine;
  readonly edge: number;
}

/** Counts a column's fine classes anew with one more edge. */
export const splitColumn: Task<SplitColumn, { readonly fine: Fine; readonly outOfTime: SlotCounts }> = ({
  defined,
  column,
  data,
  counted,
  fine,
  edge,
}) => splitFineClass(defined, sourceOfOne(defined, column, counted.rows), data, counted, fine, edge);

export interface ReclassFine {
  readonly characteristics: readonly {
    readonly fine: Fine;
    readonly outOfTime: SlotCounts;
    readonly constraints: AskedConstraints;
  }[];
}

/** Classes characteristics anew from fine classes that are already counted. */
export const reclassFine: Task<ReclassFine, ({ readonly automatic: Bins; readonly constraints: Constraints } & Summarised)[]> = (
  { characteristics },
  { cancelled, progress },
) =>
  characteristics.map(({ fine, outOfTime, constraints: asked }, index) => {
    if (cancelled()) throw new Error('Cancelled');
    progress('Classing', index / characteristics.length);
    const { bins: automatic, constraints } = classFine(fine, asked);
    return { automatic, constraints, ...summarise(fine, outOfTime, automatic, constraints) };
  });
