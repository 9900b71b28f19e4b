/** One characteristic on the bench: what its bins say and how they are edited. The same code runs in the browser and on the server. */
export * from './types';
export * from './slots';
export * from './labels';
export * from './trend';
export * from './stability';
export * from './reading';
export * from './interval';
export * from './months';
export * from './warnings';
export * from './round';
export * from './best-split';
export * from './numeric-edits';
export * from './categorical-edits';
export * from './carry';
