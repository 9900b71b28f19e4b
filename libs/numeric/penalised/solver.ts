import { Design } from './design';
import { lossAndResidual, rootCurvature } from './loss';
import { penaltyAt, scaledPenalty, violation, type ScaledPenalty } from './penalty';
import type { Fit, FitProblem, FitStatus, Penalty } from './problem';
import { minimiseModel } from './quadratic-model';
import { isSeparated } from './separation';

export interface SolveOptions {
  readonly tolerance: number;
  readonly mostIterations?: number;
  /** Called with the objective after each accepted iteration. */
  readonly onIteration?: (objective: number) => void;
  /** Hold the penalised coefficients at 0: the fit of intercept and unpenalised columns. */
  readonly unpenalisedOnly?: boolean;
}

/** The weighted Gram matrix of an earlier point, kept as the curvature of the model until it no longer serves. */
interface Curvature {
  readonly list: Uint32Array;
  /** (m + 1) x (m + 1), the intercept first. */
  readonly gram: Float64Array;
  /** m x m, the intercept eliminated. */
  readonly eliminated: Float64Array;
}

const MOST_ITERATIONS = 500;

/**
 * Proximal Newton by coordinate descent. Outside, the loss is replaced by a quadratic model whose curvature is a weighted Gram matrix, possibly of
 * an earlier point; inside, coordinate descent minimises model plus penalty. The exact gradient alone decides convergence, so a stale Gram matrix
 * costs iterations and never accuracy. The objective never rises: a step that raises it is halved. Warm starts come from the state that is kept.
 */
export class Solver {
  readonly design: Design;
  /** Intercept of the centred columns and t_j = b_j s_j. */
  private centredIntercept = 0;
  private readonly t: Float64Array;
  private penalty: ScaledPenalty;
  private curvature: Curvature | null = null;
  private kept: Curvature | null = null;
  readonly eta: Float64Array;
  private readonly residual: Float64Array;
  private readonly root: Float64Array;
  private readonly coefficients: Float64Array;
  /** Uncentred gradient for t, valid for the columns last asked for. */
  private readonly gradient: Float64Array;
  private gradientOfIntercept = 0;
  private loss = 0;
  private previousLambda = Infinity;

  constructor(
    private readonly problem: {
      readonly columns: FitProblem['columns'];
      readonly outcome: Uint8Array;
      readonly offset?: Float64Array;
    },
    private readonly penaltySettings: Penalty,
    weights?: ArrayLike<number>,
  ) {
    const rows = problem.outcome.length;
    this.design = new Design(problem.columns, rows, weights);
    this.penalty = scaledPenalty(penaltySettings, this.design);
    this.t = new Float64Array(problem.columns.length);
    this.coefficients = new Float64Array(problem.columns.length);
    this.gradient = new Float64Array(problem.columns.length);
    this.eta = new Float64Array(rows);
    this.residual = new Float64Array(rows);
    this.root = new Float64Array(rows);
    this.startAtBaseRate();
  }

  /** New weights with their own standardisation; the curvature stays as it is, a near enough model for a resample. */
  weigh(weights: ArrayLike<number>): void {
    this.design.weigh(weights);
    this.penalty = scaledPenalty(this.penaltySettings, this.design);
    const { used } = this.design;
    const usable = (curvature: Curvature | null): boolean => curvature !== null && curvature.list.every((j) => used.includes(j));
    if (!usable(this.curvature)) this.curvature = null;
    if (!usable(this.kept)) this.kept = null;
    this.previousLambda = Infinity;
  }

  private startAtBaseRate(): void {
    let good = 0;
    const { share } = this.design;
    for (let i = 0; i < share.length; i++) if (this.problem.outcome[i] === 1) good += share[i];
    this.centredIntercept = Math.log(good / (1 - good));
  }

  /** Starts from given coefficients on the scale of x. */
  startFrom(intercept: number, coefficients: ArrayLike<number>): void {
    let centred = intercept;
    this.t.fill(0);
    for (const j of this.design.used) {
      const { lower, upper } = this.penalty;
      this.t[j] = Math.min(upper[j], Math.max(lower[j], coefficients[j] * this.design.scale[j]));
      centred += (this.t[j] / this.design.scale[j]) * this.design.centre[j];
    }
    this.centredIntercept = centred;
    this.previousLambda = Infinity;
  }

  /** Intercept on the scale of x; fills `coefficients`. */
  private unscale(): number {
    let intercept = this.centredIntercept;
    this.coefficients.fill(0);
    for (const j of this.design.used) {
      if (this.t[j] === 0) continue;
      const coefficient = this.t[j] / this.design.scale[j];
      this.coefficients[j] = coefficient;
      intercept -= coefficient * this.design.centre[j];
    }
    return intercept;
  }

  /** eta, residual and the gradient of the listed columns at the present point; returns the objective. */
  private evaluate(lambda: number, list: ArrayLike<number>): number {
    const { design, problem, penalty } = this;
    design.linearPredictor(this.unscale(), this.coefficients, problem.offset, this.eta);
    this.loss = lossAndResidual(this.eta, problem.outcome, design.share, this.residual);
    let objective = this.loss;
    let sum = 0;
    for (let i = 0; i < this.residual.length; i++) sum += this.residual[i];
    this.gradientOfIntercept = sum;
    design.gradient(this.residual, list, this.gradient);
    for (const j of design.used) {
      const t = this.t[j];
      if (t !== 0) objective += penaltyAt(lambda, penalty.absolute[j] * Math.abs(t) + (penalty.square[j] / 2) * t * t);
    }
    return objective;
  }

  private violationOf(j: number, lambda: number): number {
    const { penalty } = this;
    const inward = violation(
      this.t[j],
      this.gradient[j],
      penaltyAt(lambda, penalty.absolute[j]),
      penaltyAt(lambda, penalty.square[j]),
      penalty.lower[j],
      penalty.upper[j],
    );
    return inward * penalty.reporting[j];
  }

  private residualOver(list: ArrayLike<number>, lambda: number): number {
    let largest = Math.abs(this.gradientOfIntercept);
    for (let l = 0; l < list.length; l++) largest = Math.max(largest, this.violationOf(list[l], lambda));
    return largest;
  }

  /** Largest |gradient| over its penalty: from where on down a penalised column is nonzero. Needs a solve of the unpenalised columns before. */
  largestLambda(): number {
    const { design, penalty, penaltySettings } = this;
    design.gradient(this.residual, design.used, this.gradient);
    let largest = 0;
    for (const j of design.used) {
      const multiplier = penaltySettings.multipliers ? penaltySettings.multipliers[j] : 1;
      if (multiplier === 0) continue;
      const inward = violation(0, this.gradient[j], 0, 0, penalty.lower[j], penalty.upper[j]);
      largest = Math.max(largest, (inward * penalty.reporting[j]) / multiplier / Math.max(penaltySettings.mixing, 0.001));
    }
    this.previousLambda = largest;
    return largest;
  }

  private isUnpenalised(j: number, lambda: number): boolean {
    return penaltyAt(lambda, this.penalty.absolute[j] + this.penalty.square[j]) === 0;
  }

  /**
   * Columns worth working on: nonzero or without an absolute penalty, and those the sequential strong rule expects to enter. Columns it misses are
   * found by the full gradient before a fit counts as converged. Source: R. Tibshirani et al., J. Royal Statistical Society B 74, 2012.
   */
  private workingSet(lambda: number, unpenalisedOnly: boolean): Uint32Array {
    const { used } = this.design;
    if (unpenalisedOnly) return used.filter((j) => this.isUnpenalised(j, 1));
    const known = Number.isFinite(this.previousLambda);
    const slack = known && lambda > 0 ? Math.max(0, 2 - Math.max(1, this.previousLambda / lambda)) : 0;
    return used.filter((j) => {
      const threshold = penaltyAt(lambda, this.penalty.absolute[j]);
      if (this.t[j] !== 0 || threshold === 0 || !known) return true;
      return Math.abs(this.gradient[j]) >= penaltyAt(slack, threshold);
    });
  }

  /** Solves on the curvature that was kept by `keep`, if it was: no solve before this one leaves a trace in it. */
  solveFromKept(lambda: number, options: SolveOptions): Fit {
    if (this.kept) this.curvature = this.kept;
    return this.solve(lambda, options);
  }

  /** Keeps the curvature at the present point, over all columns, for `solveFromKept`. */
  keep(): void {
    this.kept = this.curvatureAt(this.design.used);
    this.curvature = this.kept;
  }

  solve(lambda: number, options: SolveOptions): Fit {
    const { tolerance } = options;
    const most = options.mostIterations ?? MOST_ITERATIONS;
    let list = this.workingSet(lambda, options.unpenalisedOnly ?? false);
    const candidates = options.unpenalisedOnly ? list : this.design.used;
    let objective = this.evaluate(lambda, list);
    let worst = this.residualOver(list, lambda);
    let fresh = false;
    let contraction = 0;
    let iterations = 0;
    let stalled = 0;
    let status: FitStatus = 'iteration-limit';
    while (true) {
      if (worst <= tolerance) {
        const entering = this.entering(list, candidates, lambda, tolerance);
        if (entering.length === 0) {
          status = 'converged';
          break;
        }
        list = Uint32Array.from([...list, ...entering]).sort();
        worst = this.residualOver(list, lambda);
      }
      if (iterations >= most || stalled >= 12) break;
      if (!this.serves(list, worst, tolerance, contraction, fresh)) {
        this.curvature = this.curvatureAt(list);
        fresh = true;
      }
      const before = worst;
      const next = this.step(lambda, list, objective, worst, tolerance);
      iterations += next.evaluations;
      stalled =
        next.moved && (next.objective < objective - 1e-15 * Math.abs(objective) || next.worst < 0.9 * before) ? 0 : stalled + 1;
      if (next.halved || !next.moved) this.curvature = null;
      objective = next.objective;
      worst = next.worst;
      contraction = worst / before;
      // After one step the curvature belongs to the point before, but only a poor contraction says that it no longer serves.
      fresh = false;
      options.onIteration?.(objective);
    }
    if (status === 'iteration-limit') this.design.gradient(this.residual, candidates, this.gradient);
    if (this.separated(lambda, worst)) status = 'separation';
    this.previousLambda = options.unpenalisedOnly ? Infinity : lambda;
    return this.present(lambda, objective, this.residualOver(candidates, lambda), iterations, status);
  }

  /** Columns outside the working set that violate optimality, by the exact gradient. */
  private entering(list: Uint32Array, candidates: Uint32Array, lambda: number, tolerance: number): number[] {
    if (list.length === candidates.length) return [];
    const inside = new Set(list);
    const outside = Array.from(candidates).filter((j) => !inside.has(j));
    this.design.gradient(this.residual, outside, this.gradient);
    return outside.filter((j) => this.violationOf(j, lambda) > tolerance);
  }

  /** Whether the kept curvature is worth another step, against the price of a new one in passes over the rows. */
  private serves(list: Uint32Array, worst: number, tolerance: number, contraction: number, fresh: boolean): boolean {
    const { curvature } = this;
    if (!curvature || list.some((j) => !curvature.list.includes(j))) return false;
    if (fresh || contraction === 0) return true;
    if (contraction > 0.5) return false;
    const size = list.length;
    const price = (0.18 * size * size) / (0.9 * size + 25);
    return Math.log(tolerance / worst) / Math.log(contraction) <= price + 2;
  }

  private curvatureAt(list: Uint32Array): Curvature {
    rootCurvature(this.eta, this.design.share, this.root);
    const gram = this.design.gram(this.root, list);
    const size = list.length;
    const eliminated = new Float64Array(size * size);
    for (let a = 0; a < size; a++) {
      const ratio = gram[a + 1] / gram[0];
      for (let b = 0; b < size; b++) eliminated[a * size + b] = gram[(a + 1) * (size + 1) + b + 1] - ratio * gram[b + 1];
    }
    return { list, gram, eliminated };
  }

  /** One step of the model, halved while it raises the objective. */
  private step(lambda: number, list: Uint32Array, objective: number, worst: number, tolerance: number) {
    const curvature = this.curvature as Curvature;
    const { penalty, design } = this;
    const own = curvature.list;
    const size = own.length;
    const start = Float64Array.from(own, (j) => this.t[j]);
    const t = start.slice();
    const gradient = new Float64Array(size);
    const model = {
      hessian: curvature.eliminated,
      l1: Float64Array.from(own, (j) => penaltyAt(lambda, penalty.absolute[j])),
      l2: Float64Array.from(own, (j) => penaltyAt(lambda, penalty.square[j])),
      lower: Float64Array.from(own, (j) => penalty.lower[j]),
      upper: Float64Array.from(own, (j) => penalty.upper[j]),
    };
    const inside = new Set(list);
    const g0 = this.gradientOfIntercept;
    own.forEach((j, a) => {
      // A column of the kept curvature that is not worked on now stays where it is.
      if (!inside.has(j)) model.lower[a] = model.upper[a] = t[a];
      const centred = inside.has(j) ? this.gradient[j] - (design.centre[j] / design.scale[j]) * g0 : 0;
      gradient[a] = centred - (curvature.gram[a + 1] / curvature.gram[0]) * g0;
    });
    const goal = Math.max(0.1 * tolerance, Math.min(1e-3 * worst, 1e-6));
    minimiseModel(
      model,
      t,
      gradient,
      Float64Array.from(own, (j) => (inside.has(j) ? goal / penalty.reporting[j] : Infinity)),
    );
    let interceptStep = -g0;
    for (let a = 0; a < size; a++) interceptStep -= curvature.gram[a + 1] * (t[a] - start[a]);
    interceptStep /= curvature.gram[0];
    const intercept = this.centredIntercept;
    let length = 1;
    for (let evaluations = 1; ; evaluations++) {
      this.centredIntercept = intercept + length * interceptStep;
      own.forEach((j, a) => (this.t[j] = length === 1 ? t[a] : start[a] + length * (t[a] - start[a])));
      const reached = this.evaluate(lambda, list);
      const now = this.residualOver(list, lambda);
      // Rounding of the objective hides the last digits of progress; there the residual tells.
      const better = reached <= objective || (reached <= objective + 1e-13 * Math.max(1, Math.abs(objective)) && now < worst);
      if (better) return { objective: reached, worst: now, evaluations, halved: length < 1, moved: true };
      if (evaluations >= 40) {
        this.centredIntercept = intercept;
        own.forEach((j, a) => (this.t[j] = start[a]));
        const back = this.evaluate(lambda, list);
        return {
          objective: back,
          worst: this.residualOver(list, lambda),
          evaluations: evaluations + 1,
          halved: true,
          moved: false,
        };
      }
      length /= 2;
    }
  }

  private separated(lambda: number, worst: number): boolean {
    const free = this.design.used.filter((j) => this.isUnpenalised(j, lambda));
    if (free.length === 0 || !(worst < 1e-3)) return false;
    const { gram } = this.curvatureAt(free);
    return isSeparated({
      columns: Array.from(free, (j) => this.problem.columns[j]),
      centre: Float64Array.from(free, (j) => this.design.centre[j]),
      scale: Float64Array.from(free, (j) => this.design.scale[j]),
      lower: Float64Array.from(free, (j) => this.penalty.lower[j] - this.t[j]),
      upper: Float64Array.from(free, (j) => this.penalty.upper[j] - this.t[j]),
      gradient: Float64Array.from(
        free,
        (j) => this.gradient[j] - (this.design.centre[j] / this.design.scale[j]) * this.gradientOfIntercept,
      ),
      gradientOfIntercept: this.gradientOfIntercept,
      gram,
      outcome: this.problem.outcome,
      share: this.design.share,
    });
  }

  private present(lambda: number, objective: number, optimalityResidual: number, iterations: number, status: FitStatus): Fit {
    const intercept = this.unscale();
    const deviance = 2 * this.design.totalWeight * this.loss;
    return {
      lambda,
      intercept,
      coefficients: this.coefficients.slice(),
      objective,
      deviance,
      optimalityResidual,
      iterations,
      status,
    };
  }
}
