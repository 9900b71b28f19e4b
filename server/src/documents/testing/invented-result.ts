import { createHash } from 'node:crypto';
import type { Result, ResultBand, ResultCharacteristic, ResultMetrics } from '@tallystone/contracts/result/types';

/** A result by formula for specs: WOE from counts, points from WOE, a path that enters by strength. */
const named: [column: string, label: string, strength: number][] = [
  ['card_utilisation', 'Card utilisation', 0.9],
  ['enquiries_6m', 'Enquiries, 6 months', 0.75],
  ['months_since_arrears', 'Months since arrears', 0.7],
  ['payment_to_income', 'Payment to income', 0.66],
  ['overdrawn_days_6m', 'Days overdrawn', 0.6],
  ['oldest_line_months', 'Age of oldest line', 0.5],
  ['months_in_job', 'Time in job', 0.42],
  ['employment', 'Employment', 0.4],
  ['average_balance_6m', 'Average balance', 0.3],
  ['monthly_income', 'Monthly income', 0.2],
  ['region', 'Region', 0.05],
  ['statement_day', 'Statement day', 0.03],
];

export const hash = (text: string): string => createHash('sha256').update(text).digest('hex');
const goodsOf = 9000;
const badsOf = 1000;
const penalties = Array.from({ length: 60 }, (_, index) => 0.1 * Math.exp(-index * 0.105));
const chosen = 30;

export function wave(seed: number): number {
  const value = Math.sin(seed * 12.9898) * 43758.5453;
  return value - Math.floor(value);
}

export function characteristic(place: number): { column: string; label: string; strength: number } {
  const [column, label, strength] = named[place] ?? [`column_${place + 1}`, `Column ${place + 1}`, 0.35 * wave(place)];
  return { column, label, strength };
}

const coefficientAt = (strength: number, lambda: number): number =>
  Math.max(0, 1.15 * strength * (1 - lambda / (0.1 * strength)));

function binsOf(place: number, coefficient: number, kept: number): ResultCharacteristic {
  const { column, strength } = characteristic(place);
  const count = 4 + (place % 4);
  const shares = Array.from({ length: count }, (_, bin) => 0.6 + wave(place * 31 + bin));
  const total = shares.reduce((sum, share) => sum + share, 0);
  const tilts = shares.map((_, bin) => Math.exp(strength * 1.6 * (bin / (count - 1) - 0.5)));
  const goodParts = shares.map((share, bin) => share * tilts[bin]);
  const badParts = shares.map((share, bin) => share / tilts[bin]);
  const sum = (parts: number[]): number => parts.reduce((all, part) => all + part, 0);
  const goods = goodParts.map((part) => Math.round((goodsOf * part) / sum(goodParts)));
  const bads = badParts.map((part) => Math.round((badsOf * part) / sum(badParts)));
  const factor = 25 / Math.LN2;
  const base = (500 - factor * Math.log(16) + factor * 2.1) / Math.max(1, kept);
  let informationValue = 0;
  const bins = goods.map((good, bin) => {
    const woe = Math.log(good / sum(goods) / (bads[bin] / sum(bads)));
    informationValue += (good / sum(goods) - bads[bin] / sum(bads)) * woe;
    const points = coefficient === 0 ? 0 : base + factor * coefficient * woe;
    const label = bin === count - 1 ? 'missing' : bin === 0 ? 'under 10' : `${bin * 10} to under ${bin * 10 + 10}`;
    return { label, rows: good + bads[bin], goods: good, bads: bads[bin], woe, points, pointsRounded: Math.round(points) };
  });
  return {
    column,
    informationValue,
    coefficient,
    bins,
    csi: { holdOut: 0.002 + 0.01 * wave(place), outOfTime: 0.01 + 0.2 * wave(place + 7) * total * 0.05 },
  };
}

function metrics(auc: number, slope: number): ResultMetrics {
  return {
    auc,
    aucStandardError: 0.0087,
    gini: 2 * auc - 1,
    ks: auc - 0.36,
    brier: 0.0812,
    logLoss: 0.2874,
    hosmerLemeshow: { statistic: 9.31, groups: 10, degreesOfFreedom: 8, pValue: 0.3168 },
    calibrationInTheLarge: -0.0312,
    calibrationSlope: slope,
    calibrationIntercept: -0.021,
    meanScore: 512.4,
    smallestScore: 391.2,
    largestScore: 618.9,
    aucRounded: auc - 0.0002,
    largestRounding: 2.31,
  };
}

function bands(): ResultBand[] {
  const edges = [450, 465, 480, 490, 500, 512, 524, 538, 556];
  return Array.from({ length: 10 }, (_, band) => {
    const counts = (rows: number): { rows: number; goods: number; bads: number } => {
      const bads = Math.round(rows * 0.31 * Math.exp(-0.33 * band));
      return { rows, goods: rows - bads, bads };
    };
    return {
      from: edges[band - 1] ?? null,
      to: edges[band] ?? null,
      development: counts(1000),
      holdOut: counts(430),
      outOfTime: counts(280),
    };
  });
}

export function inventedResult(count: number): Result {
  const places = Array.from({ length: count }, (_, place) => place);
  const lambda = penalties[chosen];
  const coefficients = places.map((place) => coefficientAt(characteristic(place).strength, lambda));
  const kept = coefficients.filter((coefficient) => coefficient !== 0).length;
  const partition = (goods: number, bads: number): Result['counts']['development'] => ({
    rows: goods + bads + 350,
    goods,
    bads,
    indeterminates: 350,
    weight: goods + bads,
  });
  return {
    format: 'tallystone-result',
    formatVersion: 1,
    specificationSha256: hash('specification'),
    dataSha256: hash('data'),
    solver: { name: 'tallystone-coordinate-descent', version: '1' },
    counts: {
      development: partition(goodsOf, badsOf),
      holdOut: partition(3857, 429),
      outOfTime: partition(2386, 360),
      excluded: [{ reason: 'staff loans', rows: 370, bads: 4 }],
      declined: 5871,
    },
    characteristics: places.map((place) => binsOf(place, coefficients[place], kept)),
    intercept: 2.1,
    lambda,
    mixing: 1,
    kept,
    objective: 0.284113,
    deviance: 5682.26,
    optimalityResidual: 3.2e-11,
    converged: true,
    basePoints: 475.741,
    path: penalties.map((penalty) => ({
      lambda: penalty,
      intercept: 2.1,
      coefficients: Object.fromEntries(
        places.map((place) => [characteristic(place).column, coefficientAt(characteristic(place).strength, penalty)]),
      ),
      deviance: 5600 + 9000 * penalty,
      optimalityResidual: 1e-10,
    })),
    crossValidation: {
      lambda: penalties,
      mean: penalties.map((penalty) => 0.566 + 1.1 * penalty + 0.000004 / penalty),
      standardError: penalties.map(() => 0.0068),
      minimum: 52,
      oneStandardError: chosen,
      atGridEnd: false,
    },
    metrics: { development: metrics(0.781, 1.09), holdOut: metrics(0.7738, 1.07), outOfTime: metrics(0.758, 1.02) },
    weightedMetrics: null,
    bands: bands(),
    psi: { holdOut: 0.0031, outOfTime: 0.1124 },
  };
}
