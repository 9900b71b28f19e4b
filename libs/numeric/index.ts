/** Pure numbers of a scorecard: typed arrays in, plain results out. Imports nothing of the project. */
export * from './errors';
export * from './penalised/index';
export * from './binning/weight-of-evidence';
export * from './binning/assignment';
export * from './scaling/points';
export * from './distributions/tails';
export * from './metrics/ordering';
export * from './metrics/discrimination';
export * from './metrics/probability-scores';
export * from './metrics/calibration';
export * from './metrics/intervals';
export * from './metrics/back-testing';
export * from './metrics/stability-index';
