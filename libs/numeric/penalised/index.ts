export * from './problem';
export {
  crossValidate,
  summarise,
  type CrossValidation,
  type CrossValidationOptions,
  type FoldFailure,
  type FoldResult,
} from './folds';
export { deviance, probabilitiesOfBad, probabilityOfBad, probabilityOfGood } from './loss';
export { linearPredictor, objective, optimalityResidual } from './optimality';
export { FIT_TOLERANCE, automaticGrid, fitAt, fitPath, largestLambda, nullDeviance, type FitOptions } from './path';
