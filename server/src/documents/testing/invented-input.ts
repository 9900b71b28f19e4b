import { createHash } from 'node:crypto';
import type { Result, ResultBand, ResultCharacteristic, ResultMetrics } from '@tallystone/contracts/result/types';
import { parseSpecification } from '@tallystone/contracts/specification/schema';
import type { DocumentInput } from '../input';

/**
 * An input for specs, invented in the scenario of Saltmarsh Mutual: numbers of the right kind and size that hang together (WOE from counts, points from
 * WOE), made by formula, so that it is the same each time. `characteristics` says how many; those past the named ones are called "Column n".
 */
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

function wave(seed: number): number {
  const value = Math.sin(seed * 12.9898) * 43758.5453;
  return value - Math.floor(value);
}

function characteristic(place: number): { column: string; label: string; strength: number } {
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

function inventedResult(count: number): Result {
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

function inventedSpecification(count: number): DocumentInput['specification'] {
  const parsed = parseSpecification({
    format: 'tallystone-specification',
    formatVersion: 1,
    title: 'Personal loans, application scorecard',
    data: { sha256: hash('data') },
    exclusions: [{ reason: 'staff loans', column: 'channel', in: ['staff'] }],
    outcome: { column: 'outcome_12m', good: ['good'], bad: ['bad'], indeterminate: ['indeterminate'] },
    declined: { column: 'decision', values: ['declined'], method: 'none' },
    partition: { seed: 7, holdOutShare: 0.3, outOfTime: { column: 'applied_on', from: '2025-01-01', to: null } },
    characteristics: Array.from({ length: count }, (_, place) => ({
      column: characteristic(place).column,
      kind: 'numeric',
      edges: [10, 20, 30],
      classing: { made: 'automatic' },
    })),
    fit: { mixing: 1, lambda: { count: 60 }, choose: 'one-standard-error', folds: { count: 10, seed: 1, classing: 'once' } },
    reasons: { texts: { card_utilisation: 'Balances of cards are high against their limits' } },
  });
  if ('problems' in parsed) throw new Error(JSON.stringify(parsed.problems));
  return parsed.specification;
}

export function inventedInput(count = 12): DocumentInput {
  const result = inventedResult(count);
  const specification = inventedSpecification(count);
  const modeller = 'Modeller at Saltmarsh Mutual';
  const validator = 'Validator at Saltmarsh Mutual';
  return {
    format: 'tallystone-document-input',
    formatVersion: 1,
    lender: 'Saltmarsh Mutual',
    edition: 2,
    demonstration: true,
    model: {
      inventoryNumber: 'M-0001',
      name: 'Personal loans, application scorecard',
      purpose: 'Decide on applications for unsecured personal loans and set the amount that may be offered.',
      product: 'Personal loans',
      population: 'Applicants through branch, web, phone and brokers, staff excluded',
      jurisdiction: 'To be named by the lender',
      owner: 'Head of lending',
      materialityTier: 2,
      intendedUse:
        'Support of the decision on an application, together with the policy rules and the judgement of an underwriter.',
      prohibitedUse: '',
    },
    version: {
      label: '1',
      state: 'Approved with conditions',
      fingerprint: hash('version'),
      codeVersion: '0.1.0',
      frozenBy: modeller,
      frozenAt: '2026-11-20T10:15:00.000Z',
    },
    signatures: [
      { act: 'frozen', name: modeller, role: 'modeller', at: '2026-11-20T10:15:00.000Z', statement: null, sequence: 212 },
      {
        act: 'submitted',
        name: modeller,
        role: 'modeller',
        at: '2026-11-21T09:00:00.000Z',
        statement: 'Ready for validation.',
        sequence: 218,
      },
      {
        act: 'concluded',
        name: validator,
        role: 'validator',
        at: '2026-11-26T16:40:00.000Z',
        statement: 'fit with conditions',
        sequence: 240,
      },
    ],
    conditions: [
      {
        text: 'Watch the stability of months since arrears each quarter.',
        kind: 'monitoring',
        owner: 'Head of lending',
        due: '2027-03-31',
        discharged: null,
      },
    ],
    texts: [
      {
        section: 1,
        topic: 'Recommendation',
        text: 'Use this version for new applications once the second signature is given.\nReview after one year.',
        author: modeller,
        writtenAt: '2026-11-20T11:00:00.000Z',
      },
      {
        section: 4,
        topic: 'Rationale',
        text: 'Loans to staff follow staff terms and say nothing about other applicants.',
        author: modeller,
        writtenAt: '2026-11-20T11:05:00.000Z',
      },
    ],
    columns: result.characteristics.map(({ column }, place) => ({ column, label: characteristic(place).label, unit: null })),
    evidence: [
      {
        number: 'E-1',
        title: 'Sample brought in and profiled',
        madeBy: modeller,
        madeAt: '2026-11-10T08:00:00.000Z',
        sha256: hash('e1'),
      },
      {
        number: 'E-2',
        title: 'Frozen specification and result',
        madeBy: modeller,
        madeAt: '2026-11-20T10:15:00.000Z',
        sha256: hash('e2'),
      },
      {
        number: 'E-3',
        title: 'Replication from the stored raw file',
        madeBy: validator,
        madeAt: '2026-11-25T12:00:00.000Z',
        sha256: hash('e3'),
      },
      {
        number: 'E-4',
        title: 'Stability over 200 resamples',
        madeBy: validator,
        madeAt: '2026-11-25T13:00:00.000Z',
        sha256: hash('e4'),
      },
    ],
    specification,
    result,
    resultEvidence: 'E-2',
    resultSha256: hash('result'),
    sourceFile: {
      evidence: 'E-1',
      fileName: 'saltmarsh-personal-loans.csv',
      bytes: 4500824,
      rows: 24673,
      columns: 38,
      sha256: hash('data'),
      broughtInBy: modeller,
      broughtInAt: '2026-11-10T08:00:00.000Z',
      replicable: true,
      note: null,
    },
    waterfall: {
      evidence: 'E-1',
      sourceRows: 24323,
      steps: [
        { reason: 'staff loans', rows: 370, bads: 4 },
        { reason: 'declined: outcome not known', rows: 5871, bads: null },
      ],
    },
    windows: {
      evidence: 'E-1',
      performanceMonths: 12,
      development: { from: '2022-07-01', to: '2024-12-31' },
      holdOut: { from: '2022-07-01', to: '2024-12-31' },
      outOfTime: { from: '2025-01-01', to: '2025-06-30' },
    },
    sensitivity: null,
    quality: {
      evidence: 'E-1',
      rows: 24673,
      columns: result.characteristics.map(({ column }, place) => ({
        column,
        type: column === 'employment' || column === 'region' ? 'text' : 'number',
        role: 'characteristic',
        protected: false,
        distinct: 120 + 37 * place,
        missing: place % 3 === 0 ? 0 : 210 * place,
        special: place % 4 === 0 ? [{ code: '-999', meaning: 'no bureau record', rows: 1400 + place }] : [],
        smallest: column === 'employment' || column === 'region' ? null : '0',
        largest: column === 'employment' || column === 'region' ? null : '128.4',
        mostFrequent: column === 'employment' ? 'permanent' : column === 'region' ? 'Harbour' : '0',
        mostFrequentRows: 4100,
        flags: place === 2 ? ['drifts in the last half-year'] : [],
      })),
    },
    classing: {
      evidence: 'E-2',
      characteristics: result.characteristics.map(({ column, bins }, place) => ({
        column,
        trend: place % 2 === 0 ? 'rising' : 'any',
        holdOut: bins.map((bin) => ({
          rows: Math.round(bin.rows * 0.43),
          goods: Math.round(bin.goods * 0.43),
          bads: Math.round(bin.bads * 0.41),
        })),
        outOfTime: bins.map((bin) => ({
          rows: Math.round(bin.rows * 0.27),
          goods: Math.round(bin.goods * 0.26),
          bads: Math.round(bin.bads * 0.34),
        })),
        edits:
          place === 0
            ? [
                {
                  at: '2026-11-12T14:00:00.000Z',
                  by: modeller,
                  edit: 'moved the cut at 30 to 32',
                  reason: 'Limits of cards are reported in steps; 32 lies between two of them.',
                },
              ]
            : [],
      })),
    },
    outOfTime: {
      covered: false,
      openings: [
        {
          at: '2026-11-19T17:00:00.000Z',
          by: modeller,
          reason: 'Last look before freezing',
          beforeFreezing: true,
          sequence: 205,
        },
      ],
    },
    penaltyChoice: {
      by: modeller,
      at: '2026-11-19T15:30:00.000Z',
      rule: 'one-standard-error rule',
      reason: 'Fewer characteristics at a deviance inside one standard error of the smallest.',
    },
    stability: {
      evidence: 'E-4',
      scheme: 'bootstrap of goods and bads apart',
      resamples: 200,
      seed: 11,
      level: 0.95,
      characteristics: result.characteristics.map(({ column, coefficient, bins }, place) => ({
        column,
        selected: (coefficient ?? 0) === 0 ? 0.2 * wave(place) : 0.9 + 0.1 * wave(place),
        sameSign: place === 9 ? 0.93 : 1,
        coefficient: (coefficient ?? 0) === 0 ? null : { lower: (coefficient ?? 0) * 0.8, upper: (coefficient ?? 0) * 1.2 },
        points: (coefficient ?? 0) === 0 ? null : bins.map((bin) => ({ lower: bin.points - 3.2, upper: bin.points + 3.1 })),
      })),
    },
    scoreDistributions: (['development', 'holdOut'] as const).map((partition) => ({
      evidence: 'E-2',
      partition,
      edges: Array.from({ length: 49 }, (_, index) => 380 + index * 5),
      goods: Array.from({ length: 48 }, (_, index) => Math.round(900 * Math.exp(-(((index - 27) / 9) ** 2)))),
      bads: Array.from({ length: 48 }, (_, index) => Math.round(110 * Math.exp(-(((index - 19) / 8) ** 2)))),
    })),
    bandCalibrations: (['development', 'holdOut', 'outOfTime'] as const).map((partition) => ({
      evidence: 'E-2',
      partition,
      bands: result.bands.map((band, place) => ({
        rows: band[partition].rows,
        bads: band[partition].bads,
        meanPd: 0.3 * Math.exp(-0.325 * place),
      })),
    })),
    comparisons: [
      {
        evidence: 'E-2',
        against: 'Incumbent score',
        partition: 'holdOut',
        auc: 0.652,
        difference: 0.1218,
        interval: { lower: 0.098, upper: 0.1456 },
        pValue: 1e-12,
      },
      {
        evidence: 'E-2',
        against: 'Unpenalised fit',
        partition: 'holdOut',
        auc: 0.7731,
        difference: 0.0007,
        interval: { lower: -0.0021, upper: 0.0035 },
        pValue: 0.624,
      },
    ],
    replications: [
      {
        evidence: 'E-3',
        method: 'same code, new process',
        solver: 'tallystone-coordinate-descent 1',
        by: validator,
        at: '2026-11-25T12:00:00.000Z',
        matches: true,
        numbersCompared: 1482,
        numbersDiffering: 0,
        largestCoefficientDifference: 2.1e-13,
        largestPointsDifference: 7.6e-12,
        integerScoresEqual: true,
        specificationSha256: hash('specification'),
        dataSha256: hash('data'),
        resultSha256: hash('replicated result'),
        intercept: 2.1,
        coefficients: result.characteristics.map(({ column, coefficient }) => ({ column, coefficient: coefficient ?? 0 })),
      },
    ],
    validation: {
      validator,
      scope: 'Replication from the raw file, discrimination, calibration, stability over resamples, review of the classing.',
      opinion: 'The fit replicates. Discrimination holds out of time. Months since arrears has drifted and is to be watched.',
      conclusion: 'fit with conditions',
      concludedAt: '2026-11-26T16:40:00.000Z',
      findings: [
        {
          number: 'F-1',
          description: 'Months since arrears drifts in the last half-year.',
          severity: 'medium',
          owner: modeller,
          due: '2027-03-31',
          state: 'open',
          evidence: 'E-4',
        },
      ],
    },
    history: [
      {
        sequence: 205,
        at: '2026-11-19T17:00:00.000Z',
        by: modeller,
        act: 'opened the out-of-time figures',
        reason: 'Last look before freezing',
      },
      { sequence: 212, at: '2026-11-20T10:15:00.000Z', by: modeller, act: 'froze version 1', reason: null },
      {
        sequence: 240,
        at: '2026-11-26T16:40:00.000Z',
        by: validator,
        act: 'concluded: fit with conditions',
        reason: 'See opinion',
      },
    ],
    recordHead: { sequence: 251, hash: hash('record') },
  };
}
