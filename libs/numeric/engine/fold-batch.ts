import type { CodedProblem } from './coded-columns';
import type { Point } from './lane';

/**
 * Some folds of a cross-validation as a piece of work for another thread: plain data, nothing of which depends on who does it. What is found comes
 * back through `sheet`, which both sides see.
 */
export interface FoldBatch {
  readonly problem: CodedProblem;
  /** Fold of each row from 1. */
  readonly folds: Uint8Array;
  readonly lambdas: readonly number[];
  /** All rows' solutions at the lambdas. */
  readonly guide: readonly Point[];
  readonly tolerance: number;
  /** Values by code of each column for the folds from `first` on; null = those of the problem. */
  readonly values: readonly (readonly ArrayLike<number>[] | null)[];
  /** The folds `first` to `end - 1`, from 0. */
  readonly first: number;
  readonly end: number;
  /** The coefficients of every fold's fits are wanted too. */
  readonly withFits: boolean;
  readonly sheet: SharedArrayBuffer;
}

/** What stands at the head of a sheet. */
const OFFERED = 0;
const TAKEN = 1;
const DONE = 2;
const GIVEN_UP = 3;
const WITHDRAWN = 4;
/** Bytes before the numbers. */
const HEAD = 8;
const PATIENCE_MS = 60_000;

/**
 * Where the results of a batch are written: for each fold and lambda the deviance and the residual, and where they are wanted the intercept and the
 * coefficients. A fold that did not converge has NaN from there on.
 */
export class FoldSheet {
  private readonly state: Int32Array;
  private readonly numbers: Float64Array;

  /**
   * @param places number of lambdas
   * @param columns coefficients of a fit; 0 where fits are not wanted
   */
  constructor(
    readonly buffer: SharedArrayBuffer,
    private readonly places: number,
    private readonly columns: number,
  ) {
    this.state = new Int32Array(buffer, 0, 1);
    this.numbers = new Float64Array(buffer, HEAD);
  }

  static bytes(folds: number, places: number, columns: number): number {
    return HEAD + 8 * folds * places * (2 + (columns > 0 ? columns + 1 : 0));
  }

  /** The helper's: false when the batch was withdrawn before it came to it. */
  take(): boolean {
    return Atomics.compareExchange(this.state, 0, OFFERED, TAKEN) === OFFERED;
  }

  finish(found: boolean): void {
    Atomics.store(this.state, 0, found ? DONE : GIVEN_UP);
    Atomics.notify(this.state, 0);
  }

  /**
   * The owner's, once its own share is done: waits for a batch that somebody works on.
   * @returns false when nobody had come to it, or it was given up: the owner does it then
   * @throws RangeError when a helper took it and never gave it back
   */
  collect(): boolean {
    if (Atomics.compareExchange(this.state, 0, OFFERED, WITHDRAWN) === OFFERED) return false;
    if (Atomics.wait(this.state, 0, TAKEN, PATIENCE_MS) === 'timed-out')
      throw new RangeError('A helping thread took folds and never gave them back.');
    return Atomics.load(this.state, 0) === DONE;
  }

  private at(fold: number, place: number): number {
    return (fold * this.places + place) * (2 + (this.columns > 0 ? this.columns + 1 : 0));
  }

  write(
    fold: number,
    place: number,
    deviance: number,
    residual: number,
    fit: { intercept: number; coefficients: Float64Array } | null,
  ): void {
    const to = this.at(fold, place);
    this.numbers[to] = deviance;
    this.numbers[to + 1] = residual;
    if (!fit) return;
    this.numbers[to + 2] = fit.intercept;
    this.numbers.set(fit.coefficients, to + 3);
  }

  read(
    fold: number,
    place: number,
  ): { deviance: number; residual: number; fit: { intercept: number; coefficients: Float64Array } | null } {
    const { numbers, columns } = this;
    const from = this.at(fold, place);
    const fit = columns > 0 ? { intercept: numbers[from + 2], coefficients: numbers.slice(from + 3, from + 3 + columns) } : null;
    return { deviance: numbers[from], residual: numbers[from + 1], fit };
  }
}
