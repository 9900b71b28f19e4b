import { auc } from '@tallystone/numeric';
import type { Scorecard } from '@tallystone/contracts/scorecards/schema';
import type { PartitionName } from '@tallystone/contracts/result/types';
import type { Specification } from '@tallystone/contracts/specification/types';
import { bandEdges } from '../replay/bands';
import { codeCharacteristics } from '../replay/coding';
import { evaluateFit, evaluatorOf } from '../replay/evaluate';
import { prepare } from '../replay/prepare';
import type { SourceColumn } from '../replay/source';
import { NO_BIN } from '../replay/types';
import type { Task } from './task';

export interface BuildScorecardPayload {
  /** With the scorecard's scaling, bands and cut-off; only characteristics that are kept. */
  readonly specification: Specification;
  readonly rows: number;
  readonly columns: ReadonlyMap<string, SourceColumn>;
  readonly intercept: number;
  readonly coefficients: readonly number[];
  readonly woe: readonly (readonly number[])[];
  readonly partitions: readonly PartitionName[];
}

export interface BuiltScorecard {
  readonly bands: Scorecard['bands'];
  readonly distribution: Scorecard['distribution'];
  readonly smallestScore: number;
  readonly largestScore: number;
  readonly rounding: Scorecard['rounding'];
  /** Mean unrounded points of development applicants whose score is at the cut-off or above it by less than the points that double the odds; null without a cut-off or such rows. */
  readonly meanPointsAtCutOff: readonly number[] | null;
}

const mostSteps = 60;

/** What a scorecard is on the sample's rows: bands and distribution of the rounded score, and what rounding costs. */
export const buildScorecard: Task<BuildScorecardPayload, BuiltScorecard> = ({ specification, rows, columns, intercept, coefficients, woe, partitions }) => {
  const source = { rows, column: (name: string) => columns.get(name) };
  const prepared = prepare(specification, source);
  const coded = codeCharacteristics(specification, source, prepared);
  const tables = woe.map((values) => {
    const none = new Float64Array(values.length);
    return { rows: none, goods: none, bads: none, woe: Float64Array.from(values), informationValue: 0 };
  });
  const evaluator = evaluatorOf(specification, prepared, coded, tables);
  const terms = specification.characteristics.map((_, characteristic) => ({ characteristic, kind: 'woe' as const }));
  const evaluation = evaluateFit(evaluator, terms, { intercept, coefficients: Float64Array.from(coefficients) }, { figures: 'path', partitions });
  const { development, holdOut } = evaluation.scores;
  const rounded = (name: PartitionName): Float64Array => evaluation.scores[name].rounded ?? new Float64Array(0);
  const outcomes = evaluator.partitions;

  const edges = bandEdges(specification.bands, rounded('development'));
  const bands: Scorecard['bands'] = Array.from({ length: edges.length + 1 }, (_, place) => {
    const from = place === 0 ? null : edges[place - 1];
    const to = place === edges.length ? null : edges[place];
    const counted = (name: PartitionName) => countBand(rounded(name), outcomes[name].outcome, from, to);
    return { from, to, development: counted('development'), holdOut: counted('holdOut'), outOfTime: partitions.includes('outOfTime') ? counted('outOfTime') : null };
  });

  const shown = [...rounded('development'), ...rounded('holdOut')];
  const outcome = [...outcomes.development.outcome, ...outcomes.holdOut.outcome];
  const { cutOff } = specification;
  const unrounded = [...development.scores, ...holdOut.scores];
  const changed = cutOff === null ? null : unrounded.filter((score, row) => score >= cutOff !== shown[row] >= cutOff).length / Math.max(1, unrounded.length);
  const both = outcomes.development.outcome.includes(0) && outcomes.development.outcome.includes(1);
  return {
    bands,
    distribution: distributionOf(shown, outcome),
    smallestScore: smallest(shown),
    largestScore: largest(shown),
    rounding: {
      largest: unrounded.reduce((most, score, row) => Math.max(most, Math.abs(score - shown[row])), 0),
      auc: both ? auc(development.scores, outcomes.development.outcome) : 0.5,
      aucRounded: both ? auc(rounded('development'), outcomes.development.outcome) : 0.5,
      decisionsChanged: changed,
    },
    meanPointsAtCutOff: cutOff === null ? null : meanPoints(cutOff),
  };

  function meanPoints(from: number): number[] | null {
    const scores = rounded('development');
    const near: number[] = [];
    outcomes.development.rows.forEach((row, place) => {
      if (scores[place] >= from && scores[place] < from + specification.scaling.pointsToDouble) near.push(row);
    });
    if (near.length === 0) return null;
    return coded.characteristics.map(({ codes }, index) => {
      const points = evaluation.points.points[index];
      const neutral = evaluation.points.neutral[index];
      if (codes === null || points === null) return 0;
      return near.reduce((sum, row) => sum + (codes[row] === NO_BIN ? neutral : points[codes[row]]), 0) / near.length;
    });
  }
};

function countBand(scores: Float64Array, outcome: Uint8Array, from: number | null, to: number | null): { rows: number; goods: number; bads: number } {
  let [rows, goods] = [0, 0];
  for (let row = 0; row < scores.length; row++) {
    if ((from !== null && scores[row] < from) || (to !== null && scores[row] >= to)) continue;
    rows++;
    goods += outcome[row];
  }
  return { rows, goods, bads: rows - goods };
}

// Spreading a million numbers into Math.min overflows the stack.
const smallest = (values: readonly number[]): number => values.reduce((low, value) => (value < low ? value : low), values[0] ?? 0);
const largest = (values: readonly number[]): number => values.reduce((high, value) => (value > high ? value : high), values[0] ?? 0);

/** Even steps of a round width over the rounded score. */
function distributionOf(scores: readonly number[], outcome: readonly number[]): Scorecard['distribution'] {
  const [low, high] = [smallest(scores), largest(scores)];
  const step = [1, 2, 5, 10, 20, 50, 100, 200, 500, 1000].find((width) => (high - low) / width <= mostSteps) ?? (high - low) / mostSteps;
  const from = Math.floor(low / step) * step;
  const count = Math.floor((high - from) / step) + 1;
  const goods = new Array<number>(count).fill(0);
  const bads = new Array<number>(count).fill(0);
  scores.forEach((score, row) => {
    (outcome[row] === 1 ? goods : bads)[Math.floor((score - from) / step)]++;
  });
  return { from, step, goods, bads };
}
