/** The penalty: lambda sum_j m_j [mixing |t_j| + (1 - mixing)/2 t_j^2], t_j = b_j s_j when standardising, else b_j. */
export interface Penalty {
  /** 1 is the lasso, 0 ridge, between them the elastic net. */
  readonly mixing: number;
  readonly standardize: boolean;
  /** m_j, one per column; absent = 1 each; 0 = unpenalised. Used as given. */
  readonly multipliers?: Float64Array;
  /** Limits on b_j (scale of x), lower <= 0 <= upper; -Infinity and Infinity mean none. */
  readonly lower?: Float64Array;
  readonly upper?: Float64Array;
}

/** converged: the optimality residual is within the tolerance; separation: the likelihood has no finite optimum. */
export type FitStatus = 'converged' | 'iteration-limit' | 'separation';

export interface Fit {
  readonly lambda: number;
  readonly intercept: number;
  /** One per column, on the scale of x. */
  readonly coefficients: Float64Array;
  /** Mean loss plus penalty. */
  readonly objective: number;
  /** 2 sum w [log(1 + e^eta) - y eta]. */
  readonly deviance: number;
  /** Largest violation of the optimality conditions on the standardised scale, from the exact gradient. */
  readonly optimalityResidual: number;
  readonly iterations: number;
  readonly status: FitStatus;
}

export interface FitProblem {
  /** One Float64Array of n values per column. */
  readonly columns: readonly Float64Array[];
  /** n values, 1 good, 0 bad. */
  readonly outcome: Uint8Array;
  /** n values of at least 0; absent = 1 each. */
  readonly weights?: Float64Array;
  /** Added to eta, not fitted. */
  readonly offset?: Float64Array;
  readonly penalty: Penalty;
}

/** A stated grid never stops early; an automatic one is logarithmic from the largest lambda down to smallestRatio times it. */
export type Grid =
  | { readonly lambdas: readonly number[] }
  | { readonly count: number; readonly smallestRatio: number; readonly earlyStop: boolean };

export interface Path {
  /** One for each lambda up to where the path ends. */
  readonly fits: Fit[];
  readonly nullDeviance: number;
  readonly largestLambda: number;
  /** The path ends before its automatic grid does. */
  readonly stoppedEarly: boolean;
  /**
   * Why it ends early, when it does: the last value gained less than 1e-5 of the null deviance, or more than 0.999 of it is explained, which
   * smaller lambdas would take towards separation.
   */
  readonly stoppedBecause?: 'little-gain' | 'explained';
}
