import { type ClassColumn, type ClassedColumn, classColumn } from '../classing/class-column';
import { joinStored } from '../storage/joinStored';
import type { Task } from './task';

export interface ClassStored extends Omit<ClassColumn, 'column'> {
  /** The segments of the column as they are stored. */
  readonly contents: readonly Uint8Array[];
}

/** Classes one characteristic from its stored column, which is opened here: on the event loop that would hold the other threads up. */
export const classStored: Task<ClassStored, ClassedColumn | { readonly unusable: string }> = ({ contents, ...rest }, control) => {
  const column = joinStored(contents);
  if (column.codes.length !== rest.counted.rows)
    throw new Error(`Column ${rest.defined.column} has ${column.codes.length} of ${rest.counted.rows} rows`);
  return classColumn({ ...rest, column }, control);
};
