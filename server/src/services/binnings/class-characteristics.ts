import type { AskedConstraints } from '@tallystone/contracts/binnings/bins';
import type { DataReading } from '@tallystone/contracts/specification/types';
import type { EarlierEdits } from '@tallystone/numeric/bench';
import type { Sequelize } from 'sequelize';
import type { ClassedColumn } from '../../classing/class-column';
import type { CountedRows } from '../../classing/fine-classes';
import type { RowMonths } from '../../replay/row-months';
import { findStored, readContents } from '../../storage/columnStore';
import { runInThread } from '../../threads/run-in-thread';
import { sharedBytes } from '../../threads/shared-bytes';
import { inTurn } from '../samples/in-turn';
import type { Barred } from './barred';

export interface ColumnToClass {
  readonly column: string;
  readonly kind: 'numeric' | 'categorical';
  readonly special: readonly { readonly label: string; readonly values: readonly (number | string)[] }[];
}

/** What an earlier binning decided about a characteristic. */
export interface Earlier {
  readonly constraints: AskedConstraints;
  /** Null where it was not edited. */
  readonly edits: EarlierEdits | null;
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
 * Classes columns one after the other, each in a thread while the next is being fetched as it is stored: memory holds as many columns as there are
 * threads.
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
  let done = 0;
  const { readingId, positions } = await findStored(sequelize, asked.sampleId);
  await inTurn([...asked.columns.entries()], async ([position, defined]) => {
    control.signal.throwIfAborted();
    const stored = positions.get(defined.column);
    if (stored === undefined) throw new Error(`The sample has no column ${defined.column}`);
    const contents = await readContents(sequelize, readingId, stored);
    const result = await runInThread(
      'binning.class',
      {
        defined: { column: defined.column, kind: defined.kind, special: defined.special },
        contents,
        data: asked.data,
        counted,
        constraints: asked.earlier.get(defined.column)?.constraints ?? asked.constraints,
        earlier: asked.earlier.get(defined.column)?.edits ?? null,
        months: asked.months,
      },
      { signal: control.signal, transfer: contents.map(({ buffer }) => buffer) },
    );
    if ('unusable' in result) unusable.push({ column: defined.column, reason: result.unusable });
    else classed.push({ ...result, column: defined.column, kind: defined.kind, position });
    control.onDone(++done);
  });
  classed.sort((a, b) => a.position - b.position);
  return { classed, unusable };
}
