export { codedColumns, type CodedColumn, type CodedProblem, type EngineColumn, type LinearColumn } from './coded-columns';
export { Alone, Team, help, type Crew, type HelpOrder } from './crew';
export { ENGINE_ROWS, fastCrossValidation, fastFit, fastPath, fastResamples, type EngineChoice, type SolvedBy } from './dispatch';
export { helpFolds } from './help-folds';
export type { FoldBatch } from './fold-batch';
export { PATH_TOLERANCE, summariseFolds, type EngineCrossValidation, type EngineFolds } from './cross-validation';
export { Engine, type EngineOptions } from './engine';
