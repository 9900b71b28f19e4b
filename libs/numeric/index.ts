/** Pure numbers of a scorecard: typed arrays in, plain results out. Imports nothing of the project. */
export * from './errors';
export * from './penalised/problem';
export * from './binning/weight-of-evidence';
export * from './binning/assignment';
export * from './scaling/points';
