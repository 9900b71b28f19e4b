import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import type { Personal } from '../../profiling/personal';
import type { DoubtfulPlaces } from '../../models/sample';
import type { FileFacts } from '../../reading/index';
import type { ReadingRun } from './read-file';

/** What both readers of a raw file are given, and what they come to. */

export interface Reading {
  readonly run: ReadingRun;
  readonly sampleId: string;
  readonly choices: ReadingChoices;
  /** Key of the hashes that columns which identify people are kept as. */
  readonly key: Buffer;
  /** Says how many bytes of the file have been read. */
  readonly progress: (bytes: number) => void;
}

export interface ReadRows {
  readonly facts: FileFacts;
  /** Per column what identifies people in it, or null. */
  readonly personal: readonly (Personal | null)[];
  /** Records that equal an earlier one. */
  readonly duplicateRows: number;
  /** By the position of a column of identifiers: how many there are when it does not count how they are written. */
  readonly writings: ReadonlyMap<number, number>;
  /** Of a file that is refused; null where no line is doubtful. */
  readonly doubtful: DoubtfulPlaces | null;
}
