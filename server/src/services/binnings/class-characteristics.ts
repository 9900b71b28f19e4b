import type { AskedConstraints } from '@tallystone/contracts/binnings/bins';
import type { DataReading } from '@tallystone/contracts/specification/types';
import type { EarlierEdit } from '@tallystone/numeric/bench';
import type { Sequelize } from 'sequelize';
import type { ClassedColumn } from '../../classing/class-column';
import type { CountedRows } from '../../classing/fine-classes';
import type { RowMonths } from '../../replay/row-months';
import { openSample } from '../../storage/columnStore';
import { runInThread, threadCount } from '../../threads/run-in-thread';
import { sharedBytes } from '../../threads/shared-bytes';
import type { Barred } from './barred';

export interface ColumnToClass {
  readonly column: string;
  readonly kind: 'numeric' | 'categorical';
  readonly special: readonly { readonly label: string; readonly values: readonly (number | string)[] }[];
}

/** What an earlier binning decided about a characteristic. */
export interface Earlier {
  readonly constraints: AskedConstraints;
  readonly edits: readonly EarlierEdit[];
}

export interface Classed {
  readonly classed: readonly (ClassedColumn & {
    readonly column: string;
    readonly kind: 'numeric' | 'categorical';
    readonly position: number;
  })[];
  readonly unusable: readonly Barred[];
}

/** Assignments in memory that threads share instead of copying. */
export function shared(counted: CountedRows): CountedRows {
  let weights: Float64Array | null = null;
  if (counted.weights) {
    weights = new Float64Array(new SharedArrayBuffer(counted.weights.byteLength));
    weights.set(counted.weights);
  }
  return { rows: counted.rows, partition: sharedBytes(counted.partition), outcome: sharedBytes(counted.outcome), weights };
}

/**
 * Classes columns one after the other, each in a thread while the next is being read: memory holds as many columns as there are threads.
 */
export async function classCharacteristics(
  sequelize: Sequelize,
  asked: {
    sampleId: string;
    data: DataReading;
    counted: CountedRows;
    columns: readonly ColumnToClass[];
    constraints: AskedConstraints;
    months: RowMonths | null;
    /** By column. */
    earlier: ReadonlyMap<string, Earlier>;
  },
  control: { signal: AbortSignal; onDone: (done: number) => void },
): Promise<Classed> {
  const counted = shared(asked.counted);
  const classed: Classed['classed'][number][] = [];
  const unusable: Barred[] = [];
  let next = 0;
  let done = 0;
  const lane = async (): Promise<void> => {
    for (let position = next++; position < asked.columns.length; position = next++) {
      control.signal.throwIfAborted();
      const defined = asked.columns[position];
      const source = await openSample(sequelize, asked.sampleId, [defined.column]);
      const column = source.column(defined.column);
      if (!column) throw new Error(`The sample has no column ${defined.column}`);
      const result = await runInThread(
        'binning.class',
        {
          defined: { column: defined.column, kind: defined.kind, special: defined.special },
          column,
          data: asked.data,
          counted,
          constraints: asked.earlier.get(defined.column)?.constraints ?? asked.constraints,
          earlier: asked.earlier.get(defined.column)?.edits ?? [],
          months: asked.months,
        },
        { signal: control.signal },
      );
      if ('unusable' in result) unusable.push({ column: defined.column, reason: result.unusable });
      else classed.push({ ...result, column: defined.column, kind: defined.kind, position });
      control.onDone(++done);
    }
  };
  await Promise.all(Array.from({ length: Math.min(threadCount(), asked.columns.length) }, lane));
  classed.sort((a, b) => a.position - b.position);
  return { classed, unusable };
}
