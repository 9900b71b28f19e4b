import { CurvaturesAlong, LaneCurvature, withTotal, type Curvature } from './curvature';
import { foretell, missedOfStep } from './forecast';
import { copyPoint, pointOf, residualAt, slopeAlong, type Lane, type Point } from './lane';
import { LaneModel } from './lane-model';
import type { Passes } from './passes';
import type { Standardisation } from './standardisation';

/** Lanes that follow a path which all rows have been along already: folds and resamples. */
export interface Follower extends Lane {
  /** Place on the path. */
  place: number;
  /** Passes at this place, and in all. */
  passes: number;
  failed: boolean;
}

export interface FollowOptions {
  /** All rows' solutions with their gradients, in the order of `lambdas`. */
  readonly guide: readonly Point[];
  readonly full: Standardisation;
  readonly lambdas: readonly number[];
  readonly tolerance: number;
  /** Rows count as the passes' counts say. */
  readonly counted: boolean;
  /**
   * A lane's curvature is taken at its own point, not at the guide's: of few rows for its columns a fold lies so far from the guide that the guide's curvature
   * leads to it in small steps alone. For layouts whose curvatures are of all rows.
   */
  readonly ownCurvature?: boolean;
  /** Mean loss over the fold that a lane leaves out at a point, where passes do not tell it. */
  readonly lossLeftOut?: (lane: number, at: Point) => number;
  /** After every pass; it may throw to stop. */
  readonly onPass?: () => void;
  /** A follower has arrived at a place, with its point; `heldOut` is its mean loss over the fold that it leaves out. */
  readonly onArrival: (lane: number, place: number, residual: number, heldOut: number) => void;
}

/** Places that one curvature serves: what it misses of a step is the guide's miss too, and taken off. */
const REFRESH = 4;
/** Places that a curvature serves which is taken at the lane's own point. */
const REFRESH_OWN = 6;
const MOST_PASSES = 40;
const MOST_STALLED = 6;

interface State {
  readonly model: LaneModel;
  readonly room: LaneCurvature;
  /** Where the last step began, with its gradient. */
  readonly before: Point;
  /** The gradient that the model foretold for the end of the step, intercept first. */
  readonly foretold: Float64Array;
  /** What the model missed of the last step from place to place, beyond what it missed of the guide's. */
  readonly missed: Float64Array;
  /** How that changed from one step to the next. */
  readonly trend: Float64Array;
  steps: number;
  curvature: Curvature | null;
  curvatureAt: number;
  /** The last step led from place to place. */
  travelled: boolean;
  residual: number;
  stalled: number;
}

/**
 * Takes followers along the guide's path. What the quadratic model misses of a step is known for the guide and all but the same for a follower, so its
 * gradient is corrected by it beforehand; most steps then need the one pass that proves them.
 */
export function follow(passes: Passes, followers: Follower[], options: FollowOptions): void {
  const { guide, full, lambdas, tolerance, ownCurvature } = options;
  const size = full.used.length;
  const states = followers.map((): State => ({
    model: new LaneModel(size),
    room: new LaneCurvature(size),
    before: pointOf(size),
    foretold: new Float64Array(size + 1),
    missed: new Float64Array(size + 1),
    trend: new Float64Array(size + 1),
    steps: 0,
    curvature: null,
    curvatureAt: -Infinity,
    travelled: false,
    residual: Infinity,
    stalled: 0,
  }));
  const goal = 0.02 * tolerance;
  const finish = pointOf(size);
  const wholeWeight = full.totalWeight;
  // A step leads from place to place: its curvature is that of the middle.
  const along = new CurvaturesAlong(passes, full, (place) => between(guide, Math.min(place, guide.length - 1)));
  const curvatureFor = (lane: number): Curvature => {
    const { leftOut, standardisation, place, point } = followers[lane];
    const state = states[lane];
    if (state.curvature && place < state.curvatureAt + (ownCurvature ? REFRESH_OWN : REFRESH)) return state.curvature;
    state.curvatureAt = place;
    const factor = wholeWeight / standardisation.totalWeight;
    return (state.curvature = ownCurvature
      ? state.room.takeAt(passes, leftOut, point, standardisation, factor)
      : state.room.take(along.gramsAt(place), leftOut, factor));
  };

  followers.forEach((follower) => copyPoint(guide[0], follower.point));
  while (true) {
    const riding = followers.flatMap((follower, lane) => (follower.failed || follower.place >= lambdas.length ? [] : [lane]));
    if (riding.length === 0) return;
    passes.run(options.counted ? followers : riding.map((lane) => followers[lane]), 'single', options.counted);
    options.onPass?.();
    for (const lane of riding) {
      const follower = followers[lane];
      const state = states[lane];
      follower.passes++;
      const was = state.residual;
      state.residual = residualAt(follower.point, follower.standardisation, lambdas[follower.place]);
      if (!state.travelled && was < Infinity && state.residual > 0.5 * was && state.residual > tolerance) {
        state.stalled++;
        // Poor progress says that the curvature does not serve this lane: it gets one of its own point.
        const own = withTotal(passes.gram(follower.point, follower.standardisation));
        state.curvature = state.room.take(own, follower.leftOut, wholeWeight / follower.standardisation.totalWeight);
        state.curvatureAt = follower.place;
      }
      if (!Number.isFinite(state.residual) || follower.passes > MOST_PASSES || state.stalled > MOST_STALLED)
        follower.failed = true;
    }
    for (const lane of riding) {
      if (followers[lane].failed) continue;
      step(lane);
    }
  }

  function step(lane: number): void {
    const follower = followers[lane];
    const state = states[lane];
    const { point, standardisation: s } = follower;
    const { before, missed, foretold, model } = state;
    if (state.travelled) {
      const { trend } = state;
      for (let k = 0; k <= size; k++) {
        const more = (k === 0 ? point.gradientOfIntercept : point.gradient[k - 1]) - foretold[k];
        const now = missed[k] + trend[k] + more;
        trend[k] = state.steps > 0 && state.residual < 3 * tolerance ? now - missed[k] : 0;
        missed[k] = now;
      }
      state.steps++;
    }
    if (state.residual <= tolerance) {
      options.onArrival(lane, follower.place, state.residual, heldOutLoss(lane));
      follower.place++;
      follower.passes = 0;
      state.residual = Infinity;
      state.stalled = 0;
      if (follower.place >= lambdas.length) return;
      copyPoint(point, before);
      const curvature = curvatureFor(lane);
      const shift = missedOfStep(curvature, guide[follower.place - 1], guide[follower.place]);
      for (let k = 0; k <= size; k++) shift[k] += missed[k] + state.trend[k];
      model.solve(curvature, s, lambdas[follower.place], before, point, goal, shift);
      foretell(curvature, before, point, shift, foretold);
      state.travelled = true;
      return;
    }
    const lambda = lambdas[follower.place];
    if (!state.travelled && follower.passes > 1 && state.residual > 10 * tolerance) {
      const slope = slopeAlong(point, before, point, s, lambda);
      if (slope > 0.5 * Math.abs(slopeAlong(before, before, point, s, lambda))) {
        point.intercept = (before.intercept + point.intercept) / 2;
        for (let j = 0; j < size; j++) point.t[j] = (before.t[j] + point.t[j]) / 2;
        return;
      }
    }
    state.travelled = false;
    copyPoint(point, before);
    model.solve(curvatureFor(lane), s, lambda, before, point, goal);
  }

  /**
   * Mean loss over the fold left out at the optimum that the last pass is within the tolerance of. The penalised optimum is no optimum of that loss, so
   * what is left of the way changes it in the first order: the model's last step leads to where it is taken, or its exact gradient over the fold times that step
   * takes the change away.
   */
  function heldOutLoss(lane: number): number {
    const follower = followers[lane];
    const { leftOut, point, heldOut, heldOutGradient, standardisation } = follower;
    if (leftOut < 0) return NaN;
    states[lane].model.solve(curvatureFor(lane), standardisation, lambdas[follower.place], point, finish, goal);
    if (!states[lane].travelled && follower.passes > 1) goOn(states[lane].before, point, finish);
    if (options.lossLeftOut) return options.lossLeftOut(lane, finish);
    if (!heldOutGradient) return NaN;
    let change = heldOutGradient[0] * (finish.intercept - point.intercept);
    for (let j = 0; j < size; j++) change += heldOutGradient[j + 1] * (finish.t[j] - point.t[j]);
    return heldOut / passes.layout.foldWeights[leftOut] + change;
  }
}

/** Largest share of a step that the next one may repeat and be taken for the first of a geometric series. */
const MOST_REPEATED = 0.5;

/**
 * What a curvature misses it misses again: the steps that it leads in shrink by about the same share, and those that are still to come sum to a geometric
 * series (Aitken's extrapolation). Takes the sum instead of its first step.
 * @param last where the last step led from `before`; `next` = where the next one leads, and gets where all of them would
 */
function goOn(before: Point, last: Point, next: Point): void {
  const size = next.t.length;
  const first = last.intercept - before.intercept;
  let along = (next.intercept - last.intercept) * first;
  let length = first * first;
  for (let j = 0; j < size; j++) {
    const step = last.t[j] - before.t[j];
    along += (next.t[j] - last.t[j]) * step;
    length += step * step;
  }
  if (!(length > 0)) return;
  const repeated = Math.max(-MOST_REPEATED, Math.min(MOST_REPEATED, along / length));
  const more = repeated / (1 - repeated);
  next.intercept += more * (next.intercept - last.intercept);
  // What the next step leads to zero is at zero.
  for (let j = 0; j < size; j++) if (next.t[j] !== 0) next.t[j] += more * (next.t[j] - last.t[j]);
}

/** The middle of the guide's step to a place. */
function between(guide: readonly Point[], place: number): { intercept: number; t: Float64Array } {
  const to = guide[place];
  const from = guide[Math.max(0, place - 1)];
  return { intercept: (from.intercept + to.intercept) / 2, t: to.t.map((value, j) => (value + from.t[j]) / 2) };
}
