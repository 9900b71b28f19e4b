/**
 * The chain from a sample to a result, free of database and web server.
 *
 * `replay` runs all of it. The pieces are the product's own: `prepare` (who is in the sample, as what), `codeCharacteristics` (one byte per
 * row and characteristic), `trainPaths` / `choosePenalty` / `finishFit` (or `fitCoded` for all three), `evaluatorOf` + `evaluateFit` (scores
 * and figures of any point of a path), `buildResult`, `compareResults`, `fingerprint`.
 */
export { bandEdges } from './bands';
export { binsOf, cutLabels, regularBins } from './bins';
export { automaticEdges, automaticGroups } from './classing';
export { challenge, FOREIGN_TOLERANCE, type Challenge } from './challenge';
export { codeCharacteristics } from './coding';
export { Columns, isoDay, type NumberView } from './columns';
export {
  compareResults,
  countNumbers,
  describeDifference,
  OTHER_METHOD,
  SAME_METHOD,
  type ComparisonOptions,
  type Difference,
} from './comparison';
export { AUXILIARY_LAMBDA } from './declined';
export { etaOf, modelTables, termsOf, type ModelTables } from './design';
export {
  evaluateFit,
  evaluatorOf,
  PARTITION_NAMES,
  type Evaluation,
  type Evaluator,
  type PartitionRows,
  type PartitionScores,
} from './evaluate';
export { canonicalJson, fingerprint } from './fingerprint';
export {
  choosePenalty,
  finishFit,
  fitCoded,
  keptOf,
  trainPaths,
  type FitRequest,
  type FittedModel,
  type Method,
  type TrainedPath,
} from './fit';
export { fitRowsOf, inDevelopment, knownRows, type FitRows } from './fit-rows';
export { measure, type MeasuredRows } from './metrics';
export { pointsOf, roundedScores, type PointsTable } from './points';
export { prepare, type PrepareOptions, type SampleDefinition } from './prepare';
export { ReplayError, type ReplayProblem } from './problems';
export { columnsRead, replay, type Replayed, type ReplayRequest } from './replay';
export { buildResult, SOLVER_NAMES, type ResultInput } from './result';
export { codesFor, sourceOf, textsOf, type ColumnSource, type NumberColumn, type SourceColumn, type TextColumn } from './source';
export * from './types';
export { woeTables, type WoeTable } from './woe';
