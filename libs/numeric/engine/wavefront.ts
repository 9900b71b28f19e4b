import { curvatureOf, type Curvature } from './curvature';
import { copyPoint, penaltyAt, pointOf, residualAt, slopeAlong, type Lane, type Point } from './lane';
import { LaneModel } from './lane-model';
import { lanesOf, type Passes, type Precision } from './passes';
import { Secants } from './secants';
import type { Standardisation } from './standardisation';

/** One place on a path, solved. */
export interface Solved {
  readonly lambda: number;
  readonly point: Point;
  /** Where the model leads from there, if that was asked for: nearer to the optimum, no pass has been there. */
  readonly ahead?: Point;
  readonly residual: number;
  readonly objective: number;
  /** Passes it took part in. */
  readonly passes: number;
  readonly converged: boolean;
}

export interface Target {
  readonly lambda: number;
  readonly tolerance: number;
  /** A point to begin at, all but optimal; absent = from the model at the nearest evaluated point. */
  readonly from?: Point;
}

interface Rider extends Lane {
  readonly place: number;
  readonly target: Target;
  readonly model: LaneModel;
  /** The point before the last step, with what was known there. */
  readonly before: Point;
  /** `before` holds where the last step began. */
  left: boolean;
  /** The last step was a model's step from the lane's own point. */
  stepped: boolean;
  passes: number;
  residual: number;
  stalled: number;
  /** The last step gained little. */
  poor: boolean;
  /** Violation of the point of another lane that it last stepped from. */
  lent: number;
  /** Taken at the lane's own point, once that of its neighbours had served it badly. */
  curvature: Curvature | null;
}

/** Lambdas between two curvatures of a sample of the rows. */
const REFRESH = 4;
/** Lambdas between two curvatures of all rows, which nothing has to correct: making their factors anew costs more than the passes that it spares. */
const REFRESH_WHOLE = 6;
/** Steps whose exact gradients correct the curvature of a sample. */
const SECANTS = 8;
/** A step that leaves more than this share of the residual gained little; one that leaves more than that gained nothing. */
const POOR = 0.5;
const STALLED = 0.9;
const MOST_PASSES = 60;
const MOST_STALLED = 8;

export interface WavefrontOptions {
  readonly precision: Precision;
  /** Called in the order of the targets; returns true to stop there. */
  readonly onSolved: (solved: Solved, place: number) => boolean;
  /** Hold the penalised coordinates at 0. */
  readonly standardisation: Standardisation;
  readonly lanes?: number;
  /** Gives `ahead` of each solved point, for whoever goes on from it. */
  readonly ahead?: boolean;
}

/**
 * Solves a path as a wavefront: lanes hold successive lambdas, each pass gives all of them their exact gradients, and each goes on from whichever
 * evaluated point violates its own optimality conditions least, its own or that of a lambda before it.
 * @param start a point with its gradient, optimal for a lambda before the first; null where every target has a point to begin at
 */
export function solvePath(passes: Passes, start: Point | null, targets: readonly Target[], options: WavefrontOptions): void {
  const { precision, standardisation: s } = options;
  const size = s.used.length;
  const width = options.lanes ?? Math.min(8, lanesOf(precision));
  const models = Array.from({ length: width }, () => new LaneModel(size));
  const solved: (Solved | undefined)[] = [];
  let riders: Rider[] = [];
  let next = 0;
  let reported = 0;
  let curvature: Curvature | null = null;
  let gram: Float64Array | null = null;
  const { isWhole } = passes.layout;
  const secants = isWhole ? null : new Secants(size, SECANTS);
  const places = isWhole ? REFRESH_WHOLE : REFRESH;
  let curvatureAt = -Infinity;
  let latest: Point | null = start;
  /** The last of the lanes, as the last pass found it: the lane itself has moved on since, and its gradient with the old point. */
  let furthest: Point | null = null;
  const refresh = (point: Point, place: number): void => {
    curvatureAt = place;
    [gram] = passes.gram(point, s, 'small', false);
    secants?.applyTo(gram);
    curvature = curvatureOf(gram, size);
  };
  /** The curvature near a place: taken anew only once the lanes have moved on, in the middle of those that have a point yet. */
  const near = (place: number): Curvature => {
    if (!curvature || place >= curvatureAt + places) {
      const middle = riders.filter(({ passes: made }) => made > 0).at(Math.min(2, riders.length - 1));
      refresh(middle?.point ?? latest ?? riders[0].point, place);
    }
    return curvature as unknown as Curvature;
  };

  while (reported < targets.length) {
    while (riders.length < width && next < targets.length) {
      const target = targets[next];
      const rider: Rider = {
        place: next,
        target,
        point: pointOf(size),
        before: pointOf(size),
        standardisation: s,
        leftOut: -1,
        heldOut: 0,
        model: models[next % width],
        left: false,
        stepped: false,
        passes: 0,
        residual: Infinity,
        stalled: 0,
        poor: false,
        lent: Infinity,
        curvature: null,
      };
      if (target.from) copyPoint(target.from, rider.point);
      else {
        const from = furthest ?? latest;
        if (!from) throw new Error('A path without a start needs a point for each target.');
        copyPoint(from, rider.before);
        rider.left = true;
        rider.model.solve(near(riders[0]?.place ?? next), s, target.lambda, from, rider.point, goalOf(target));
      }
      riders.push(rider);
      next++;
    }
    passes.run(riders, precision);
    const points: (Point | null)[] = [latest];
    const kept: Rider[] = [];
    for (const rider of riders) {
      const { target, point } = rider;
      rider.passes++;
      const was = rider.residual;
      rider.residual = residualAt(point, s, target.lambda);
      rider.poor = rider.stepped && rider.residual > POOR * was;
      if (rider.stepped && rider.residual > STALLED * was) rider.stalled++;
      const finished = rider.residual <= target.tolerance;
      const failed = !Number.isFinite(rider.residual) || rider.passes >= MOST_PASSES || rider.stalled >= MOST_STALLED;
      if (finished || failed) {
        const ahead = options.ahead ? pointOf(size) : undefined;
        if (ahead) rider.model.solve(near(rider.place), s, target.lambda, point, ahead, goalOf(target));
        solved[rider.place] = {
          lambda: target.lambda,
          point,
          ahead,
          residual: rider.residual,
          objective: point.loss + penaltyAt(point, s, target.lambda),
          passes: rider.passes,
          converged: finished,
        };
      } else kept.push(rider);
      points.push(point);
    }
    if (secants && gram) {
      let told = false;
      for (const { left, before, point } of riders) if (left && secants.learn(gram, before, point)) told = true;
      if (told) curvature = curvatureOf(gram, size);
    }
    // Poor progress says that the curvature does not serve a lane. That of the lane furthest behind is taken anew for all; another one, whose lambda may lie
    // far from it, gets one of its own.
    for (const rider of kept) {
      if (!rider.poor) continue;
      if (rider === kept[0]) refresh(rider.point, rider.place);
      else rider.curvature = curvatureOf(passes.gram(rider.point, s, 'small', false)[0], size);
    }
    const bases = points.map((point) => {
      if (!point) return null;
      const copy = pointOf(size);
      copyPoint(point, copy);
      return copy;
    });
    furthest = bases.at(-1) ?? null;
    for (const rider of kept) {
      advance(rider, riders.indexOf(rider), bases, s, rider.curvature ?? near(kept[0].place));
    }
    const done = riders.filter((rider) => !kept.includes(rider)).at(-1);
    if (done && (kept.length === 0 || done.place < kept[0].place)) latest = done.point;
    else if (kept.length > 0) latest = solved[kept[0].place - 1]?.point ?? latest;
    riders = kept;
    for (let ready = solved[reported]; ready; ready = solved[reported]) {
      if (options.onSolved(ready, reported++)) return;
    }
  }
}

const goalOf = (target: Target): number => Math.max(1e-13, 0.02 * target.tolerance);

/** One step of a lane, from the base that suits it best. A step that overshot is halved. */
function advance(rider: Rider, index: number, bases: readonly (Point | null)[], s: Standardisation, curvature: Curvature): void {
  const { point, before, target } = rider;
  const own = bases[index + 1] as Point;
  if (rider.stepped) {
    const slope = slopeAlong(own, before, own, s, target.lambda);
    const was = slopeAlong(before, before, own, s, target.lambda);
    if (slope > 0.5 * Math.abs(was) && rider.residual > 10 * target.tolerance) {
      point.intercept = (before.intercept + own.intercept) / 2;
      for (let j = 0; j < point.t.length; j++) point.t[j] = (before.t[j] + own.t[j]) / 2;
      rider.left = false;
      return;
    }
  }
  let base = own;
  let least = rider.residual;
  for (let k = index; k >= Math.max(0, index - 2); k--) {
    const other = bases[k];
    if (!other) continue;
    const violation = residualAt(other, s, target.lambda);
    // A point that is no better than one which has led to where the lane is would lead there again.
    if (violation < 0.7 * Math.min(least, rider.lent)) {
      base = other;
      least = violation;
    }
  }
  rider.stepped = base === own;
  if (!rider.stepped) rider.lent = least;
  copyPoint(base, before);
  rider.left = true;
  if (!rider.stepped) rider.residual = Infinity;
  rider.model.solve(curvature, s, target.lambda, base, point, goalOf(target));
}
