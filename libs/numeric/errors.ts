/**
 * Errors of the numeric library. Bad arguments throw; what data can do to a fit (separation, an iteration limit) is a status of the result
 * instead. Every error carries a stable code and the place it is about, so that a caller can name the row, bin or column to a person.
 */
export type NumericErrorCode =
  | 'length-mismatch'
  | 'not-a-number'
  | 'out-of-range'
  | 'no-rows'
  | 'one-class'
  | 'zero-cell'
  | 'singular'
  | 'too-many-rows'
  | 'infeasible';

export type Place = Readonly<Record<string, number | string>>;

/** What is wrong with an argument: a stable code, a sentence, and the place (`where`) for the caller to name to a person. */
export class NumericError extends Error {
  constructor(
    readonly code: NumericErrorCode,
    message: string,
    readonly where: Place = {},
  ) {
    super(message);
    this.name = 'NumericError';
  }
}

/** A bin with rows has no good or no bad while smoothing is "never": its weight of evidence would be infinite. */
export class ZeroCellError extends NumericError {
  constructor(
    readonly bin: number,
    readonly side: 'goods' | 'bads',
  ) {
    super('zero-cell', `Bin ${bin} has rows but no ${side}; its weight of evidence is infinite without smoothing.`, {
      bin,
      side,
    });
    this.name = 'ZeroCellError';
  }
}
