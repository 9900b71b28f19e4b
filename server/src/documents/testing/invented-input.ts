import { parseSpecification } from '@tallystone/contracts/specification/schema';
import type { DocumentInput } from '../input';
import { characteristic, hash, inventedResult, wave } from './invented-result';

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

/**
 * An input for specs, invented in the scenario of Saltmarsh Mutual: numbers of the right kind and size that hang together (WOE from counts, points from
 * WOE), made by formula, so that it is the same each time. `count` says how many characteristics; those past the named ones are called "Column n".
 */
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
    columns: result.characteristics.map(({ column }, place) => ({
      column,
      label: characteristic(place).label,
      unit: place === 0 ? '%' : null,
    })),
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
    outcomeCounts: {
      evidence: 'E-1',
      readings: (['as they are', 'as good', 'as bad'] as const).map((indeterminates, place) => ({
        indeterminates,
        development: {
          goods: 9000 + (place === 1 ? 350 : 0),
          bads: 1000 + (place === 2 ? 350 : 0),
          badRate: [0.1, 0.09662, 0.13043][place],
        },
        holdOut: {
          goods: 3857 + (place === 1 ? 350 : 0),
          bads: 429 + (place === 2 ? 350 : 0),
          badRate: [0.10009, 0.09254, 0.16804][place],
        },
      })),
      byRule: null,
    },
    sensitivity: {
      evidence: 'E-4',
      partition: 'holdOut',
      rows: 4_321,
      approvalRate: 0.724,
      cases: (['as they are', 'as good', 'as bad'] as const).map((indeterminates, place) => ({
        indeterminates,
        goods: [9_000, 9_700, 9_000][place],
        bads: [1_050, 1_050, 1_350][place],
        kept: [7, 7, 8][place],
        converged: place < 2,
        gini: [0.512, 0.514, 0.494][place],
        rankCorrelation: [1, 0.996, 0.981][place],
        decisionsChanged: [0, 0.012, 0.034][place],
      })),
    },
    dictionary: {
      evidence: 'E-1',
      lines: result.characteristics
        .slice(1)
        .map(({ column }) => ({ column, description: `What ${column} says of an applicant at application.` })),
    },
    quality: {
      evidence: 'E-1',
      rows: 24673,
      columns: result.characteristics.map(({ column }, place) => ({
        column,
        type: column === 'employment' || column === 'region' ? 'text' : 'number',
        role: 'characteristic',
        protected: column === 'employment',
        distinct: 120 + 37 * place,
        missing: place % 3 === 0 ? 0 : 210 * place,
        special:
          place % 4 === 0
            ? [
                {
                  code: '-999',
                  meaning: 'no bureau record',
                  treatment: place === 0 ? 'Points of its own bin.' : null,
                  rows: 1400 + place,
                },
              ]
            : [],
        smallest: column === 'employment' || column === 'region' ? null : '0',
        largest: column === 'employment' || column === 'region' ? null : '128.4',
        mostFrequent: column === 'employment' ? 'permanent' : column === 'region' ? 'Harbour' : '0',
        mostFrequentRows: 4100,
        flags: place === 2 ? ['drifts in the last half-year'] : [],
      })),
    },
    protection: {
      evidence: 'E-1',
      acts: [
        {
          column: 'employment',
          act: 'permitted',
          citation: 'Section 4 of the invented Saltmarsh Lending Act',
          reason: 'Entered with the wrong section.',
          by: 'Compliance at Saltmarsh Mutual',
          at: '2026-11-05T09:00:00.000Z',
          holds: false,
        },
        {
          column: 'employment',
          act: 'withdrawn',
          citation: 'Section 4 of the invented Saltmarsh Lending Act',
          reason: 'Section 4 is about deposits.',
          by: 'Compliance at Saltmarsh Mutual',
          at: '2026-11-05T09:20:00.000Z',
          holds: false,
        },
        {
          column: 'employment',
          act: 'permitted',
          citation: 'Section 14 of the invented Saltmarsh Lending Act',
          reason: 'Income that is not regular is repaid from differently.',
          by: 'Compliance at Saltmarsh Mutual',
          at: '2026-11-05T09:30:00.000Z',
          holds: true,
        },
      ],
      unflagged: [{ column: 'region', role: 'characteristic', sample: 1, definition: 1, reason: null }],
    },
    qualityFlags: {
      evidence: 'E-1',
      madeAt: '2026-11-03T09:30:00.000Z',
      flags: [
        {
          column: null,
          weight: 'look',
          finding: '12 rows equal an earlier one in every column (0.0 %).',
          takesPart: true,
          answer: null,
        },
        {
          column: result.characteristics[2].column,
          weight: 'look',
          finding: 'PSI 0.31 in 2025-02 against the first year; by chance it would stay below 0.012.',
          takesPart: true,
          answer: {
            answer: 'accepted',
            reason: 'A new channel was opened in January; its applicants are meant to be scored.',
            by: 'Modeller at Saltmarsh Mutual',
            at: '2026-11-04T10:00:00.000Z',
          },
        },
        { column: 'collections_fee', weight: 'look', finding: 'Missing only for goods.', takesPart: false, answer: null },
      ],
    },
    balance: {
      evidence: 'E-1',
      characteristics: result.characteristics.map(({ column }, place) => {
        const reading = (rows: number, index: number) => ({
          rows,
          index,
          classes: 11,
          smoothed: place === 7,
          criticalValue: 0.0061,
          pValue: 0.04,
          largest: { label: '128 to under 4719', development: 0.101, compared: 0.101 + index },
        });
        return { column, holdOut: reading(4286, 0.002 + 0.001 * place), outOfTime: reading(2746, place === 2 ? 0.31 : 0.01) };
      }),
      compared: [
        {
          partition: 'seed 3, 30 % hold-out, out-of-time by applied_on from 2025-01-01',
          largest: 0.31,
          comparedAt: '2026-11-03T09:00:00.000Z',
          comparedBy: 'Modeller at Saltmarsh Mutual',
        },
        {
          partition: 'seed 7, 30 % hold-out, out-of-time by applied_on from 2025-01-01',
          largest: 0.31,
          comparedAt: '2026-11-03T09:20:00.000Z',
          comparedBy: 'Modeller at Saltmarsh Mutual',
        },
      ],
    },
    segments: {
      evidence: 'E-1',
      columns: [
        {
          column: 'region',
          protected: false,
          groups: [
            { label: 'Harbour', kind: 'values', rows: 14000, goods: 7800, bads: 700, unknown: 5500 },
            { label: 'Marshes', kind: 'values', rows: 10600, goods: 5040, bads: 720, unknown: 4840 },
            { label: 'Islands', kind: 'values', rows: 73, goods: 17, bads: 9, unknown: 47 },
          ],
          holdOut: {
            evidence: 'E-2',
            values: [
              { value: 'Harbour', rows: 2550, bads: 214, auc: 0.7812 },
              { value: 'Marshes', rows: 1728, bads: 215, auc: 0.7641 },
              { value: 'Islands', rows: 8, bads: null, auc: null },
            ],
          },
        },
        { column: 'sex', protected: true, groups: [], holdOut: null },
      ],
    },
    priorCorrection: null,
    inferenceReason: null,
    acceptsOnly: null,
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
          under: 'earlier',
          sample: 1,
          definition: 1,
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
        challenge: {
          varianceInflation: result.characteristics.map(({ column }, index) => ({ column, value: 1.1 + index / 10 })),
          conditionIndex: 1.9,
          foreign: {
            rows: 4200,
            of: 8400,
            intercept: { own: 2.11, foreign: 2.1098 },
            coefficients: result.characteristics.map(({ column, coefficient }) => ({
              column,
              own: (coefficient ?? 0) + 0.04,
              foreign: (coefficient ?? 0) + 0.0402,
            })),
            largestDifference: 0.0002,
          },
        },
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
