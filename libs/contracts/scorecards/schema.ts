import { z } from 'zod';
import { Erasure } from '../samples/erasure';
import { scorecardAbilities } from './abilities';

const number = z.number();
const nullable = z.number().nullable();
const code = z.string().min(1).max(1000);

export const ScalingSettings = z.strictObject({
  pointsToDouble: z.number().min(1, 'At least 1 point').max(1000, 'At most 1000 points'),
  baseScore: z.number().min(-10000).max(10000),
  baseOdds: z.number().min(0.001, 'Above 0').max(1000000),
  /** spread: base points shared equally by the characteristics kept; base: they stand alone. */
  intercept: z.enum(['spread', 'base']),
  rounding: z.literal('nearest'),
});

/** Lower-closed edges of the score, or quantiles of development. */
export const BandSettings = z.union([
  z.strictObject({ quantiles: z.int().min(2, 'At least 2 bands').max(50, 'At most 50 bands') }),
  z
    .array(z.number())
    .min(1, 'At least one edge')
    .max(49)
    .refine((edges) => edges.every((edge, i) => i === 0 || edge > edges[i - 1]), 'Edges must rise'),
]);

export const ReasonSettings = z.strictObject({
  /** Against what the loss of points is counted. */
  baseline: z.enum(['mean', 'cut-off', 'largest']),
  most: z.int().min(1).max(10),
  /** By column: what a declined applicant is told. Approved by compliance. */
  texts: z.record(code, z.string().trim().max(500)),
});

export const ScorecardSettings = z.strictObject({
  scaling: ScalingSettings,
  bands: BandSettings,
  reasons: ReasonSettings,
  /** Approve at this rounded score and above; null while not stated. */
  cutOff: z.number().nullable(),
});

export const ScorecardBin = z.object({
  label: z.string(),
  rows: z.int(),
  goods: number,
  bads: number,
  woe: number,
  points: number,
  pointsRounded: number,
});

export const ScorecardCharacteristic = z.object({
  column: z.string(),
  label: z.string(),
  kind: z.enum(['numeric', 'categorical']),
  coefficient: number,
  informationValue: number,
  bins: z.array(ScorecardBin),
  /** Points of WOE 0: what an unseen category gets. */
  neutral: number,
});

export const BandPart = z.object({ rows: z.int(), goods: number, bads: number });
export const ScoreBand = z.object({
  from: nullable,
  to: nullable,
  development: BandPart,
  holdOut: BandPart,
  /** Null while covered or without such rows. */
  outOfTime: BandPart.nullable(),
});

/** What rounding costs. */
export const RoundingCost = z.object({
  largest: number,
  auc: number,
  aucRounded: number,
  /** Share of applicants of development and hold-out whose decision changes at the cut-off; null without a cut-off. */
  decisionsChanged: nullable,
});

/** The scorecard of a fit at the penalty chosen for it. */
export const Scorecard = z
  .object({
    fitId: z.uuid(),
    modelId: z.uuid(),
    fitName: z.string(),
    choice: z.object({ id: z.uuid(), index: z.int(), lambda: number, rule: z.enum(['minimum', 'one-standard-error', 'by hand']) }),
    settings: ScorecardSettings,
    /** 0 while nothing was saved; also the ETag. */
    revision: z.int(),
    intercept: number,
    factor: number,
    offset: number,
    basePoints: number,
    basePointsRounded: number,
    form: z.enum(['spread', 'base']),
    characteristics: z.array(ScorecardCharacteristic),
    /** Set once the rows of its sample were erased: points stay, what is counted on rows is null, and there are no bands. */
    erased: Erasure.nullable(),
    bands: z.array(ScoreBand),
    outOfTimeState: z.enum(['none', 'covered', 'opened']),
    /** Score distribution in even steps: goods and bads of development and hold-out. */
    distribution: z.object({ from: number, step: number, goods: z.array(number), bads: z.array(number) }).nullable(),
    smallestScore: nullable,
    largestScore: nullable,
    rounding: RoundingCost.nullable(),
    /** Points with a coefficient against WOE, for the justification that submission needs. */
    againstWoe: z.array(z.string()),
    abilities: z.array(z.enum(scorecardAbilities)),
  })
  .meta({ id: 'Scorecard' });

/** One applicant by form: fields as texts, as they would stand in a file; a field left out or empty is missing. */
export const Applicant = z.strictObject({ fields: z.record(code, z.string().max(1000)) });

export const ScoredApplicant = z
  .object({
    score: z.int(),
    unrounded: number,
    probabilityOfBad: number,
    decision: z.enum(['approve', 'decline']).nullable(),
    points: z.array(
      z.object({ column: z.string(), label: z.string(), bin: z.string(), woe: number, points: number, pointsRounded: number }),
    ),
    /** Largest loss against the baseline first, only real losses, at most the stated number. */
    reasons: z.array(z.object({ column: z.string(), text: z.string(), loss: number })),
    caution: z.string(),
  })
  .meta({ id: 'ScoredApplicant' });

export const ofFit = z.strictObject({ fitId: z.uuid() });

export type ScorecardSettings = z.infer<typeof ScorecardSettings>;
export type ScalingSettings = z.infer<typeof ScalingSettings>;
export type Scorecard = z.infer<typeof Scorecard>;
export type ScorecardCharacteristic = z.infer<typeof ScorecardCharacteristic>;
export type ScoreBand = z.infer<typeof ScoreBand>;
export type Applicant = z.infer<typeof Applicant>;
export type ScoredApplicant = z.infer<typeof ScoredApplicant>;
