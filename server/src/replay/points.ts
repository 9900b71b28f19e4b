import { roundAwayFromZero, scaleToPoints } from '@tallystone/numeric';
import type { Scaling } from '@tallystone/contracts/specification/types';
import type { ModelTables } from './design';
import type { CodeMatrix } from './types';

/** The points of a model: per characteristic null if it is not kept (or "linear", which never enters a scorecard). */
export interface PointsTable {
  factor: number;
  offset: number;
  /** Offset + Factor x intercept, whichever form. */
  basePoints: number;
  /** What every applicant gets in the form used: 0 in the spread form. */
  startPoints: number;
  startPointsRounded: number;
  points: (number[] | null)[];
  pointsRounded: (number[] | null)[];
  /** Points of a row in no bin (WOE 0). */
  neutral: number[];
  neutralRounded: number[];
  /** False if a "linear" characteristic is kept: then there is no scorecard and rounded scores mean nothing. */
  isScorecard: boolean;
}

/** @example pointsOf(specification.scaling, modelTables(model, terms, coded, tables), coded).points[0] */
export function pointsOf(scaling: Scaling, model: ModelTables, coded: CodeMatrix): PointsTable {
  const scored = coded.characteristics.flatMap(({ codes }, index) => (model.kept[index] && codes !== null ? [index] : []));
  const terms = scored.map((index) => ({
    coefficient: 1,
    woe: coded.characteristics[index].bins.map((_, bin) => model.contributions[index]?.[bin] ?? 0),
  }));
  const scaled = scaleToPoints(scaling, { intercept: model.intercept, terms });
  const place = new Map(scored.map((index, order) => [index, order]));
  const at = <Value>(values: Value[], index: number): Value | null => {
    const order = place.get(index);
    return order === undefined ? null : values[order];
  };
  const neutral = coded.characteristics.map((_, index) => at(scaled.neutral, index) ?? 0);
  return {
    factor: scaled.factor,
    offset: scaled.offset,
    basePoints: scaled.basePoints,
    startPoints: scaled.form === 'base' ? scaled.basePoints : 0,
    startPointsRounded: scaled.basePointsRounded,
    points: coded.characteristics.map((_, index) => at(scaled.points, index)),
    pointsRounded: coded.characteristics.map((_, index) => at(scaled.pointsRounded, index)),
    neutral,
    neutralRounded: neutral.map((value) => roundAwayFromZero(value)),
    isScorecard: coded.characteristics.every(({ codes }, index) => codes !== null || !model.kept[index]),
  };
}

/** Sums of rounded points of some rows. */
export function roundedScores(table: PointsTable, coded: CodeMatrix, rows: Uint32Array): Float64Array {
  const scores = new Float64Array(rows.length).fill(table.startPointsRounded);
  coded.characteristics.forEach(({ codes }, index) => {
    const points = table.pointsRounded[index];
    if (codes === null || points === null) return;
    const byCode = new Float64Array(256).fill(table.neutralRounded[index]);
    byCode.set(points);
    for (let place = 0; place < scores.length; place++) scores[place] += byCode[codes[rows[place]]];
  });
  return scores;
}
