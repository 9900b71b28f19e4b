import { z } from 'zod';
import { Erasure } from '../samples/erasure';
import { fitAbilities, fitListAbilities } from './abilities';
import { OutcomeRefits } from './outcome-refits';

/** A value that came back as a double: JSON has no infinity or NaN, so what cannot be computed is null. */
const number = z.number();
const nullable = z.number().nullable();

export const fitStates = ['queued', 'running', 'ready', 'failed', 'cancelled'] as const;
export const FitState = z.enum(fitStates);

/** free: penalised as the others; always kept: unpenalised (multiplier 0); left out: not in the fit. */
export const treatments = ['free', 'always kept', 'left out'] as const;
export const Treatment = z.enum(treatments);

const Reason = z.string().trim().max(2000);

/**
 * How one characteristic enters the fit, where it differs from the default (free, multiplier 1, no sign constraint). Whoever keeps or
 * leaves out a characteristic by hand says why.
 */
export const CharacteristicTreatment = z
  .strictObject({
    column: z.string().min(1),
    treatment: Treatment.default('free'),
    penaltyMultiplier: z
      .number()
      .min(0.01, 'At least 0.01; to leave a characteristic unpenalised choose "always kept"')
      .max(100)
      .default(1),
    /** Only coefficients of at least 0: risk must fall with WOE. */
    signConstraint: z.boolean().default(false),
    reason: Reason.default(''),
  })
  .refine((entry) => entry.treatment === 'free' || entry.reason.length > 0, {
    path: ['reason'],
    message: 'Say why this characteristic is kept or left out by hand',
  });

export const FoldClassing = z.enum(['once', 'woe', 'cuts']);

export const declinedMethods = ['none', 'reweighting', 'parcelling', 'fuzzy'] as const;
export const DeclinedMethod = z.enum(declinedMethods);
export type DeclinedMethod = z.infer<typeof DeclinedMethod>;

/**
 * What declined applicants contribute to WOE and fit, never to a metric. The assumptions behind every method but "none" cannot be tested on accepted
 * applicants, so that a fit with one has the accepts-only fit beside it.
 */
export const DeclinedSettings = z
  .strictObject({
    method: DeclinedMethod.default('none'),
    /** Score bands of parcelling. */
    bands: z.int().min(2, 'At least 2 bands').max(100, 'At most 100 bands').default(10),
    /** Factor on the bad rate of a band in parcelling. */
    uplift: z.number().positive('More than 0').max(20, 'At most 20').default(1.5),
    reason: Reason.default(''),
  })
  .refine((entry) => entry.method === 'none' || entry.reason.length > 0, {
    path: ['reason'],
    message: 'Say why declined applicants are inferred',
  });

/** Accepts only: what a fit does with declined applicants unless it says otherwise. */
export const noInference: z.output<typeof DeclinedSettings> = { method: 'none', bands: 10, uplift: 1.5, reason: '' };

/** The bad rate of the population, where the sample was drawn with another one: moves the intercept and nothing else. */
export const PriorCorrection = z.strictObject({
  populationBadRate: z.number().gt(0, 'More than 0').lt(1, 'Less than 1'),
  reason: Reason.min(1, 'Say where the bad rate of the population comes from'),
});

/** The settings of one fit over a whole penalty path. Names are those of the specification. */
export const FitSettings = z.strictObject({
  name: z.string().trim().min(1, 'Give the fit a name').max(120),
  /** 1 is the lasso (L1), 0 ridge (L2), between them the elastic net. */
  mixing: z.number().min(0, 'Between 0 and 1').max(1, 'Between 0 and 1').default(1),
  standardize: z.boolean().default(true),
  lambda: z
    .strictObject({
      count: z.int().min(2, 'At least 2 penalties').max(200, 'At most 200 penalties').default(100),
      smallestRatio: z.number().min(1e-8, 'At least 1e-8').max(0.5, 'At most 0.5').default(0.0001),
      earlyStop: z.boolean().default(true),
    })
    .default({ count: 100, smallestRatio: 0.0001, earlyStop: true }),
  folds: z
    .strictObject({
      count: z.int().min(2, 'At least 2 folds').max(50, 'At most 50 folds').default(10),
      seed: z.int().min(0).max(2147483647).default(1),
      /** once: bins and WOE of all development rows; woe: WOE from each training part; cuts: cuts and WOE from each training part. */
      classing: FoldClassing.default('woe'),
    })
    .default({ count: 10, seed: 1, classing: 'woe' }),
  /** Added to every good and bad count where a bin lacks one of them. */
  woe: z
    .strictObject({
      smoothing: z.number().min(0).max(10).default(0.5),
      when: z.enum(['zero-cell', 'always', 'never']).default('zero-cell'),
    })
    .default({ smoothing: 0.5, when: 'zero-cell' }),
  declined: DeclinedSettings.default(noInference),
  priorCorrection: PriorCorrection.nullable().default(null),
  characteristics: z
    .array(CharacteristicTreatment)
    .max(1000)
    .default([])
    .refine(
      (entries) => new Set(entries.map((entry) => entry.column)).size === entries.length,
      'A characteristic is listed twice',
    ),
});

export const NewFit = z.strictObject({ binningId: z.uuid(), settings: FitSettings });

export const choiceRules = ['minimum', 'one-standard-error', 'by hand'] as const;
export const ChoiceRule = z.enum(choiceRules);

/** Which penalty the modeller takes, by which rule, and why. */
export const NewChoice = z
  .strictObject({ index: z.int().min(0), rule: ChoiceRule, reason: Reason.default('') })
  .refine((choice) => choice.rule !== 'by hand' || choice.reason.length > 0, {
    path: ['reason'],
    message: 'A penalty chosen by hand needs its reason',
  });

export const FitChoice = z.object({
  id: z.uuid(),
  index: z.int(),
  lambda: number,
  kept: z.int(),
  rule: ChoiceRule,
  reason: z.string(),
  by: z.string(),
  at: z.string(),
});

export const FitSummary = z.object({
  id: z.uuid(),
  modelId: z.uuid(),
  /** 1, 2, 3 … within the model. */
  number: z.int(),
  name: z.string(),
  state: FitState,
  runId: z.uuid().nullable(),
  binningId: z.uuid(),
  binningName: z.string(),
  definitionId: z.uuid(),
  mixing: number,
  inference: DeclinedMethod,
  /** The fit on accepted applicants alone that stands beside a fit with inference. */
  acceptsOnlyId: z.uuid().nullable(),
  /** How many characteristics took part. */
  characteristics: z.int(),
  choice: FitChoice.nullable(),
  /** The binning has changed since: the fit still shows what was fitted, but no longer what the bins are now. */
  stale: z.boolean(),
  /** Hold-out AUC at the choice (or at the one-standard-error rule while nothing is chosen); null while there is none. */
  holdOutAuc: nullable,
  problem: z.string().nullable(),
  createdBy: z.string(),
  createdAt: z.string(),
  /** Set once the rows of its sample were erased: it is read and no longer gone on with. */
  erased: Erasure.nullable(),
});
export const FitList = z
  .object({ fits: z.array(FitSummary), abilities: z.array(z.enum(fitListAbilities)) })
  .meta({ id: 'FitList' });

export const Fit = FitSummary.extend({
  settings: FitSettings,
  /** Also the ETag; a choice sends it back as If-Match. */
  revision: z.int(),
  abilities: z.array(z.enum(fitAbilities)),
}).meta({ id: 'Fit' });

/** Metrics of one partition at one penalty. */
export const PenaltyMetrics = z.object({
  rows: z.int(),
  goods: number,
  bads: number,
  auc: number,
  aucLower: nullable,
  aucUpper: nullable,
  ks: number,
  brier: number,
  calibrationInTheLarge: nullable,
  calibrationSlope: nullable,
});

export const FitBin = z.object({ label: z.string(), rows: z.int(), goods: number, bads: number, woe: number });
export const FittedCharacteristic = z.object({
  column: z.string(),
  label: z.string(),
  kind: z.enum(['numeric', 'categorical']),
  treatment: Treatment,
  informationValue: number,
  bins: z.array(FitBin),
});

/** What a prior correction did: corrected intercept = intercept of the fit + shift, in ln(good:bad). */
export const InterceptShift = z.object({ sampleBadRate: number, populationBadRate: number, shift: number });

/** What a fit on a sample's definition can draw on beside the characteristics. */
export const FitBasis = z
  .object({
    definitionId: z.uuid(),
    weight: z.string().nullable(),
    groupKey: z.string().nullable(),
    /** Who was declined, by which column; null where nobody is. */
    declined: z.object({ column: z.string(), values: z.array(z.string()), rows: z.int() }).nullable(),
    /** Unweighted, of the goods and bads of development. */
    badRate: nullable,
  })
  .meta({ id: 'FitBasis' });
export type FitBasis = z.infer<typeof FitBasis>;

/**
 * The whole path, evaluated at every penalty, so that moving along it asks nothing of the server. All lists run over the k penalties,
 * largest first; coefficients[i] runs over the characteristics, in the orientation ln(good:bad).
 */
export const FitPath = z
  .object({
    lambdas: z.array(number),
    intercepts: z.array(number),
    coefficients: z.array(z.array(number)),
    kept: z.array(z.int()),
    deviance: z.array(number),
    nullDeviance: number,
    objective: z.array(number),
    optimalityResidual: z.array(number),
    status: z.array(z.enum(['converged', 'iteration-limit', 'separation'])),
    largestLambda: number,
    stoppedEarly: z.boolean(),
    /** Intercepts, points and calibration are after it; null where none is stated. */
    priorCorrection: InterceptShift.nullable(),
    characteristics: z.array(FittedCharacteristic),
    crossValidation: z.object({
      mean: z.array(number),
      standardError: z.array(number),
      minimum: z.int(),
      oneStandardError: z.int(),
      atGridEnd: z.boolean(),
      /** Places on the path where a fold's fit did not reach its tolerance; absent where all did, and where it was not kept. */
      notConverged: z.array(z.int()).optional(),
      folds: z.int(),
      classing: FoldClassing,
    }),
    /** At the penalties of both rules; null where nothing is indeterminate, and absent where a path is from before this was made. */
    outcomeRefits: OutcomeRefits.nullable().optional(),
    development: z.array(PenaltyMetrics.nullable()),
    holdOut: z.array(PenaltyMetrics.nullable()),
    /** Null while covered, or where the sample has no such rows: `outOfTimeState` says which. */
    outOfTime: z.array(PenaltyMetrics.nullable()).nullable(),
    outOfTimeState: z.enum(['none', 'covered', 'opened']),
    /** Points are shown under this scaling until a scorecard states its own. */
    scaling: z.object({
      pointsToDouble: number,
      baseScore: number,
      baseOdds: number,
      intercept: z.enum(['spread', 'base']),
      rounding: z.literal('nearest'),
    }),
  })
  .meta({ id: 'FitPath' });

export const ofModel = z.strictObject({ modelId: z.uuid() });
export const ofFit = z.strictObject({ fitId: z.uuid() });
export const ofDefinition = z.strictObject({ definitionId: z.uuid() });

export type FitSettings = z.infer<typeof FitSettings>;
export type CharacteristicTreatment = z.infer<typeof CharacteristicTreatment>;
export type Treatment = z.infer<typeof Treatment>;
export type NewFit = z.input<typeof NewFit>;
export type NewChoice = z.input<typeof NewChoice>;
export type ChoiceRule = z.infer<typeof ChoiceRule>;
export type FitChoice = z.infer<typeof FitChoice>;
export type FitSummary = z.infer<typeof FitSummary>;
export type FitList = z.infer<typeof FitList>;
export type Fit = z.infer<typeof Fit>;
export type FitState = z.infer<typeof FitState>;
export type FitPath = z.infer<typeof FitPath>;
export type FittedCharacteristic = z.infer<typeof FittedCharacteristic>;
export type PenaltyMetrics = z.infer<typeof PenaltyMetrics>;
