/**
 * Reading raw files.
 *
 * 1. `sniff(firstBytes)` guesses encoding, delimiter and number signs, to be confirmed.
 * 2. `readSegments(stream, choices, options)` reads any size in bounded memory, segment by segment (what intake stores).
 *    `readColumns(stream, choices, options)` gathers the columns a replay needs in memory.
 * 3. Types are decided afterwards from the distinct texts: `judgeFormat`, `numberReader`, and `fault` for why a text is no number.
 *
 * Nothing is repaired. Every problem of a file comes at once with its line, record and column; a file with any problem gives no data.
 */
export { readColumns, type ColumnOptions } from './columns';
export { readForReplay, sourceOfFile } from './file-source';
export { readSegments, type SegmentedFile } from './segments';
export { sniff, type Sniffed } from './sniff';
export {
  isNumberSomehow,
  judgeFormat,
  numberReader,
  ThousandsQuestion,
  type FormatJudgement,
  type NumberFault,
  type NumberFormat,
  type NumberReader,
} from './numbers';
export {
  ReadingError,
  type ColumnSegment,
  type Doubt,
  type FileFacts,
  type RawColumn,
  type ReadFile,
  type ReadingChoices,
  type ReadingOptions,
  type ReadingProblem,
  type ReadingProblemCode,
  type ReadingProgress,
  type Segment,
} from './types';
