/**
 * The words of the description that a kernel reads: 32-bit whole numbers from its start on. Places are byte addresses in the one memory that
 * holds everything. This file is read by both compilers, so it holds plain numbers only.
 */

/** Rows of a block; a block lies in one fold. */
export const BLOCK = 256;

/** Where the constants lie (`constants.ts`), and how many of them are singles. */
export const CONSTANTS_AT = 64;
export const SINGLES = 20;

/** Vectors of 128 bits per row: 4 lanes each in single precision, 2 in double. */
export const VECTORS = 0;
/** Codes, [block][pack][row of the block], one byte each. */
export const CODES = 1;
export const PACKS = 2;
/** Per pack four words: place of its first code among all codes, number of codes, its first column, number of columns. */
export const PACK_TABLE = 3;
/** Per coded column two words: its first bin among all bins, place of the bins by code of its pack (bytes). */
export const COLUMN_TABLE = 4;
/** Per block two words: rows, fold. */
export const BLOCK_TABLE = 5;
/** Per chunk two words: first block, blocks. */
export const CHUNK_TABLE = 6;
/** Partial linear predictors, [code][lane]. */
export const TABLES = 7;
/** Contributions of bins to the linear predictor, [bin][lane], doubles. */
export const CONTRIBUTIONS = 8;
/** Packs that take part in the linear predictor, and in the gradient. */
export const ETA_LIST = 9;
export const ETA_COUNT = 10;
export const GRADIENT_LIST = 11;
export const GRADIENT_COUNT = 12;
/** Per row: minus its weight for a good, its weight for a bad. */
export const SIGNED_WEIGHTS = 13;
/** Per row, 0 = none. */
export const OFFSETS = 14;
/** Per lane. */
export const INTERCEPTS = 15;
/** Per fold: the vector whose loss is summed, -1 = none. Double precision sums all. */
export const LOSS_VECTORS = 16;
export const LINEAR = 17;
/** [block][linear column][row of the block]. */
export const LINEAR_VALUES = 18;
/** [linear column][lane]. */
export const LINEAR_SLOPES = 19;
/** Per chunk: sums of residuals by bin and lane, by linear column and lane, by lane; then sums of losses by lane. Doubles. */
export const RESULTS = 20;
export const RESULT_BYTES = 21;
export const BINS = 22;
/** Per row and lane one byte, 0 = none: how often the row counts in the lane. */
export const COUNTS = 23;
/** 0: residuals of the logistic loss; 1: weights themselves. */
export const MODE = 24;
/** Per unit of a Gram matrix three words: first block, blocks, step from block to block. */
export const GRAM_UNITS = 25;
/** Columns with the intercept, rounded up to a multiple of 4. */
export const GRAM_SIZE = 26;
/** Per coded column the place of its values by code of its pack, singles. */
export const GRAM_VALUES = 27;
/** [unit][GRAM_SIZE][GRAM_SIZE], doubles, above the diagonal. */
export const GRAM_RESULTS = 28;
export const COLUMNS = 29;
export const WORDS = 32;
