import { type ColumnMeasure, type RowFacts, measureColumn } from '../profiling/quality/measure';
import { type ColumnReading, readValues } from '../profiling/quality/read-column';
import type { Task } from './task';

export interface QualityPayload {
  /** The segments of the column as they are stored. */
  readonly contents: readonly Uint8Array[];
  readonly rows: number;
  readonly reading: ColumnReading;
  readonly specialLabels: readonly string[];
  /** Over shared memory: every thread looks at the same rows. */
  readonly facts: RowFacts;
}

/** Counts what the quality report says of one stored column. */
export const qualityColumn: Task<QualityPayload, ColumnMeasure> = ({ contents, rows, reading, specialLabels, facts }) =>
  measureColumn(readValues(contents, rows, reading), facts, specialLabels);
