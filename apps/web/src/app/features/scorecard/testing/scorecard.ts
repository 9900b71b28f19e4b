import type { CountedScorecard } from '../ui/scorecard-view';

/** Two invented characteristics; points follow from the scaling: Factor = 20 / ln 2, Offset = 600 − Factor ln 50. */
export const smallScorecard: CountedScorecard = {
  fitId: '22222222-2222-4222-8222-222222222222',
  modelId: '11111111-1111-4111-8111-111111111111',
  fitName: 'Lasso',
  choice: { id: '33333333-3333-4333-8333-333333333333', index: 4, lambda: 0.01, rule: 'minimum' },
  settings: {
    scaling: { pointsToDouble: 20, baseScore: 600, baseOdds: 50, intercept: 'base', rounding: 'nearest' },
    bands: [540, 560],
    reasons: { baseline: 'mean', most: 4, texts: { age: 'Length of life so far', home: 'Kind of home' } },
    cutOff: 550,
  },
  revision: 2,
  intercept: 1,
  factor: 20 / Math.LN2,
  offset: 600 - (20 / Math.LN2) * Math.log(50),
  basePoints: 515.98,
  basePointsRounded: 516,
  form: 'base',
  characteristics: [
    {
      column: 'age',
      label: 'age',
      kind: 'numeric',
      coefficient: 1,
      informationValue: 0.2,
      neutral: 0,
      bins: [
        { label: 'under 30', rows: 40, goods: 24, bads: 16, woe: -0.5, points: -14.4, pointsRounded: -14 },
        { label: '30 and over', rows: 60, goods: 54, bads: 6, woe: 0.5, points: 14.4, pointsRounded: 14 },
      ],
    },
    {
      column: 'home',
      label: 'home',
      kind: 'categorical',
      coefficient: 0.5,
      informationValue: 0.1,
      neutral: 0,
      bins: [
        { label: 'owner, parents', rows: 50, goods: 44, bads: 6, woe: 0.4, points: 5.8, pointsRounded: 6 },
        { label: 'rent', rows: 50, goods: 34, bads: 16, woe: -0.4, points: -5.8, pointsRounded: -6 },
      ],
    },
  ],
  bands: [
    { from: null, to: 540, development: { rows: 30, goods: 15, bads: 15 }, holdOut: { rows: 10, goods: 5, bads: 5 }, outOfTime: null },
    { from: 540, to: 560, development: { rows: 40, goods: 36, bads: 4 }, holdOut: { rows: 10, goods: 9, bads: 1 }, outOfTime: null },
    { from: 560, to: null, development: { rows: 30, goods: 29, bads: 1 }, holdOut: { rows: 10, goods: 10, bads: 0 }, outOfTime: null },
  ],
  outOfTimeState: 'covered',
  distribution: { from: 530, step: 10, goods: [10, 20, 30, 40], bads: [12, 8, 4, 1] },
  smallestScore: 532,
  largestScore: 568,
  rounding: { largest: 0.9, auc: 0.78, aucRounded: 0.778, decisionsChanged: 0.006 },
  erased: null,
  againstWoe: [],
  abilities: ['edit', 'freeze'],
};
