import { z } from 'zod';
import { ComparedMetrics } from '@tallystone/contracts/comparison/schema';
import { resultSchema } from '@tallystone/contracts/result/schema';
import { CharacteristicBalance, ComparedPartition } from '@tallystone/contracts/samples/balance';
import { OutcomeRefits, Refit } from '@tallystone/contracts/fits/outcome-refits';
import { RuleCounts, SensitivityCase } from '@tallystone/contracts/samples/definition';
import { QualityGroup } from '@tallystone/contracts/samples/quality';
import { specificationSchema } from '@tallystone/contracts/specification/schema';
import { Challenge } from '@tallystone/contracts/validation/schema';
import { Conclusion } from '@tallystone/contracts/versions/schema';

/**
 * What the model-governance document is made of: frozen evidence, gathered before, and nothing else. The document is a function of this
 * input and of the fixed date, so whoever keeps both can make the same bytes again.
 *
 * Conventions: every part that carries numbers names the evidence they come from (`evidence`: "E-3"), which must be in the list `evidence`; a
 * part that does not exist is null and prints "not evidenced". Counts are rows unless said otherwise, rates and shares are fractions,
 * times ISO 8601 strings, hashes lower-case hexadecimal SHA-256.
 */

const sha256 = z.string().regex(/^[0-9a-f]{64}$/, 'expected 64 lower-case hexadecimal digits');
export const EvidenceNumber = z.string().regex(/^E-[1-9]\d*$/, 'expected an evidence number such as E-3');
const cited = EvidenceNumber.nullable();
const time = z.string().min(1);
const count = z.int().nonnegative();
const maybe = z.number().nullable();

/** Sections of this edition, by their number in the table of contents. */
export const writtenSections = [1, 2, 4, 5, 6, 7, 8, 9, 10, 11, 15, 18] as const;

export const ModelFacts = z.strictObject({
  inventoryNumber: z.string(),
  name: z.string(),
  purpose: z.string(),
  product: z.string(),
  population: z.string(),
  jurisdiction: z.string(),
  owner: z.string(),
  materialityTier: z.int(),
  intendedUse: z.string(),
  prohibitedUse: z.string(),
});

export const VersionFacts = z.strictObject({
  /** As the product shows it, for example "1". */
  label: z.string(),
  state: z.string(),
  /** Over data, settings, code version and results. */
  fingerprint: sha256,
  codeVersion: z.string(),
  frozenBy: z.string(),
  frozenAt: time,
});

/** An act on the version that somebody answers for. */
export const Signature = z.strictObject({
  act: z.enum([
    'frozen',
    'submitted',
    'withdrawn',
    'validation started',
    'concluded',
    'documentation accepted',
    'documentation returned',
  ]),
  name: z.string(),
  role: z.string(),
  at: time,
  /** What the person said with it: a conclusion, a reason. */
  statement: z.string().nullable(),
  /** Its place in the record of actions. */
  sequence: z.int().nullable(),
});

export const Condition = z.strictObject({
  text: z.string(),
  kind: z.string().nullable(),
  owner: z.string().nullable(),
  due: time.nullable(),
  discharged: z.string().nullable(),
});

/** A text that only a person can write. `topic` is free ("Recommendation", "Rationale"). */
export const AuthorText = z.strictObject({
  section: z.int(),
  topic: z.string(),
  text: z.string(),
  author: z.string(),
  writtenAt: time,
});

export const EvidenceItem = z.strictObject({
  number: EvidenceNumber,
  title: z.string(),
  madeBy: z.string(),
  madeAt: time,
  sha256,
});

export const ColumnLabel = z.strictObject({ column: z.string(), label: z.string(), unit: z.string().nullable() });

/** What the dictionary says of a column beside its label and unit. */
export const DictionaryLine = z.strictObject({ column: z.string(), description: z.string() });

export const SourceFile = z.strictObject({
  evidence: cited,
  fileName: z.string(),
  bytes: count,
  rows: count,
  columns: count,
  sha256,
  broughtInBy: z.string(),
  broughtInAt: time,
  /** False once the rows of the sample have been erased; then `note` says when, by whom and why. */
  replicable: z.boolean(),
  note: z.string().nullable(),
});

/** From the rows of the file to the rows of the partitions, each step with what it takes out. */
export const Waterfall = z.strictObject({
  evidence: cited,
  sourceRows: count,
  /** In order: exclusions, then declined applications, excluded outcomes. `bads` null where the outcome is not known. */
  steps: z.array(z.strictObject({ reason: z.string(), rows: count, bads: count.nullable() })),
});

/** Dates of application that each partition spans, and the months over which the outcome was observed. */
export const Windows = z.strictObject({
  evidence: cited,
  performanceMonths: z.int().nullable(),
  development: z.strictObject({ from: time, to: time }).nullable(),
  holdOut: z.strictObject({ from: time, to: time }).nullable(),
  outOfTime: z.strictObject({ from: time, to: time }).nullable(),
});

/** The outcome counted again with its indeterminates read otherwise, and what a rule on days past due takes at each of its parts. */
export const OutcomeCounts = z.strictObject({
  evidence: cited,
  /** Empty where nothing is indeterminate; null where it was not counted. */
  readings: z.array(SensitivityCase).nullable(),
  /** Null where the outcome is by values. */
  byRule: RuleCounts.nullable(),
});

/** The fit again with the indeterminates as good and as bad, at the penalty of the version. */
export const Sensitivity = z.strictObject({
  evidence: cited,
  partition: OutcomeRefits.shape.partition,
  rows: count,
  approvalRate: z.number().nullable(),
  /** Empty where no row of development is indeterminate. */
  cases: z.array(Refit),
});

export const ColumnQuality = z.strictObject({
  column: z.string(),
  type: z.string(),
  /** The column's role: characteristic, outcome, not used … */
  role: z.string(),
  protected: z.boolean(),
  distinct: count,
  missing: count,
  /** Each special code with its meaning, its rows, and what the dictionary says is done about it. */
  special: z.array(z.strictObject({ code: z.string(), meaning: z.string(), treatment: z.string().nullable(), rows: count })),
  /** As texts, numbers and dates alike. */
  smallest: z.string().nullable(),
  largest: z.string().nullable(),
  mostFrequent: z.string().nullable(),
  mostFrequentRows: count,
  flags: z.array(z.string()),
});

/** Protected columns as they stood when the version was frozen: what compliance permitted or withdrew, and what is flagged no longer. */
export const DocumentedProtection = z.strictObject({
  evidence: cited,
  acts: z.array(
    z.strictObject({
      column: z.string(),
      act: z.enum(['permitted', 'withdrawn']),
      citation: z.string(),
      reason: z.string(),
      by: z.string(),
      at: time,
      /** Whether it is the permission that held. */
      holds: z.boolean(),
    }),
  ),
  /** Flagged protected by an earlier definition of the model, and not by the version's. */
  unflagged: z.array(z.strictObject({ column: z.string(), role: z.string(), sample: z.int(), definition: z.int(), reason: z.string().nullable() })),
});

/** A flag of the quality report, with the answer that stood when the version was frozen. */
export const RaisedFlag = z.strictObject({
  /** Null for what concerns the file as a whole. */
  column: z.string().nullable(),
  weight: z.enum(['stop', 'look', 'note']),
  finding: z.string(),
  /** Whether the column takes part in the definition. */
  takesPart: z.boolean(),
  answer: z.strictObject({ answer: z.enum(['accepted', 'not used']), reason: z.string(), by: z.string(), at: time }).nullable(),
});

/** Development against the other partitions, characteristic by characteristic. */
export const Balance = z.strictObject({
  evidence: cited,
  characteristics: z.array(CharacteristicBalance),
  /** The partitions that were compared before the definition was confirmed; null where that was not kept. */
  compared: z.array(ComparedPartition).nullable(),
});

/** What a column with the role of a segment splits. Of a protected one nothing is told. */
export const Segment = z.strictObject({
  column: z.string(),
  protected: z.boolean(),
  groups: z.array(QualityGroup),
  /** The version's figures on the hold-out, by value; null where they were not made. `bads` and `auc` null where there are too few to read. */
  holdOut: z
    .strictObject({
      evidence: cited,
      values: z.array(z.strictObject({ value: z.string(), rows: count, bads: count.nullable(), auc: maybe })),
    })
    .nullable(),
});

/** The bad rate of the population against that of the sample; `shift` is added to the intercept in ln(good:bad). */
export const Correction = z.strictObject({
  evidence: cited,
  sampleBadRate: z.number(),
  populationBadRate: z.number(),
  shift: z.number(),
  reason: z.string().nullable(),
});

const measured = ComparedMetrics.nullable();

/** The fit on accepted applicants alone that stands beside one with inference. */
export const AcceptsOnly = z.strictObject({
  evidence: cited,
  name: z.string(),
  number: z.int(),
  chosenBy: z.string(),
  lambda: z.number(),
  kept: count,
  development: measured,
  holdOut: measured,
  outOfTime: measured,
  /** `own` of this version, `beside` of the other; 0 where not kept, null where it takes no part. */
  coefficients: z.array(z.strictObject({ column: z.string(), own: maybe, beside: maybe })),
});

const binCounts = z.strictObject({ rows: count, goods: z.number().nonnegative(), bads: z.number().nonnegative() });

/** Counts by bin on the other partitions, in the order of `result.characteristics[].bins`, and the record of edits by hand. */
export const ClassedCharacteristic = z.strictObject({
  column: z.string(),
  trend: z.string().nullable(),
  holdOut: z.array(binCounts).nullable(),
  outOfTime: z.array(binCounts).nullable(),
  edits: z.array(z.strictObject({ at: time, by: z.string(), edit: z.string(), reason: z.string().nullable() })),
});

/** Each time somebody lifted the cover from the out-of-time figures, under whatever definition of the same rows. */
export const OutOfTime = z.strictObject({
  covered: z.boolean(),
  openings: z.array(
    z.strictObject({
      at: time,
      by: z.string(),
      reason: z.string(),
      beforeFreezing: z.boolean(),
      /** The version's own definition, or one confirmed before or after it over the same rows. */
      under: z.enum(['this', 'earlier', 'later']),
      /** Number of the sample, and of the definition within it. */
      sample: z.int(),
      definition: z.int(),
      sequence: z.int().nullable(),
    }),
  ),
});

/** Why this penalty: the saved choice with its reason. */
export const PenaltyChoice = z.strictObject({ by: z.string(), at: time, rule: z.string(), reason: z.string().nullable() });

const interval = z.strictObject({ lower: z.number(), upper: z.number() });

/** Behaviour over resamples. Entries in any order, by column. */
export const Stability = z.strictObject({
  evidence: cited,
  /** For example "bootstrap, goods and bads apart". */
  scheme: z.string(),
  resamples: count,
  seed: z.int().nullable(),
  /** Of the intervals, for example 0.95. */
  level: z.number(),
  characteristics: z.array(
    z.strictObject({
      column: z.string(),
      /** Share of resamples that keep it. */
      selected: z.number(),
      /** Share of the resamples that keep it in which the sign is that of the version; null when never kept. */
      sameSign: maybe,
      coefficient: interval.nullable(),
      /** Points by bin, in the order of the result's bins; null where not calculated. */
      points: z.array(interval.nullable()).nullable(),
    }),
  ),
});

const distributionCounts = z.array(z.number().nonnegative());

/** Goods and bads by equal-width classes of the score: edges has one entry more than the counts. */
export const ScoreDistribution = z.strictObject({
  evidence: cited,
  partition: z.enum(['development', 'holdOut', 'outOfTime']),
  edges: z.array(z.number()).min(2),
  goods: distributionCounts,
  bads: distributionCounts,
});

/** Mean PD and observed bads of each of the result's bands, by partition. */
export const BandCalibration = z.strictObject({
  evidence: cited,
  partition: z.enum(['development', 'holdOut', 'outOfTime']),
  bands: z.array(z.strictObject({ rows: count, bads: count, meanPd: maybe })),
});

/** AUC of this version against another on the same rows. `pValue` null on rows that both were developed on. */
export const PairedComparison = z.strictObject({
  evidence: cited,
  against: z.string(),
  partition: z.enum(['development', 'holdOut', 'outOfTime']),
  auc: z.number(),
  difference: z.number(),
  interval: interval.nullable(),
  pValue: maybe,
});

/** The other half: an own fit of the validator from the stored raw file. */
export const Replication = z.strictObject({
  evidence: cited,
  /** For example "same code, new process" or "independent method (accelerated proximal gradient)". */
  method: z.string(),
  solver: z.string(),
  by: z.string(),
  at: time,
  matches: z.boolean(),
  numbersCompared: count,
  numbersDiffering: count,
  largestCoefficientDifference: maybe,
  largestPointsDifference: maybe,
  /** Every rounded score the same. */
  integerScoresEqual: z.boolean().nullable(),
  specificationSha256: sha256,
  dataSha256: sha256,
  resultSha256: sha256.nullable(),
  /** Coefficients of the replication, by column, and its intercept, to be laid beside those of the version. */
  intercept: maybe,
  coefficients: z.array(z.strictObject({ column: z.string(), coefficient: z.number() })),
  /** Collinearity of what is kept and the foreign library's unpenalised fit: with the independent method. */
  challenge: Challenge.nullable(),
});

export const Finding = z.strictObject({
  number: z.string(),
  description: z.string(),
  severity: z.enum(['critical', 'high', 'medium', 'low']),
  owner: z.string(),
  due: time.nullable(),
  state: z.string(),
  evidence: cited,
});

export const Validation = z.strictObject({
  validator: z.string(),
  scope: z.string().nullable(),
  /** The validator's own words; nobody else can change them. */
  opinion: z.string().nullable(),
  conclusion: Conclusion.nullable(),
  concludedAt: time.nullable(),
  /** Null where findings are not recorded: then "not evidenced", which is not the same as none. */
  findings: z.array(Finding).nullable(),
});

export const HistoryEntry = z.strictObject({
  sequence: z.int(),
  at: time,
  by: z.string(),
  act: z.string(),
  reason: z.string().nullable(),
});

const parts = z.strictObject({
  format: z.literal('tallystone-document-input'),
  formatVersion: z.literal(1),
  lender: z.string().min(1),
  /** Counts the documents made of this version, from 1. */
  edition: z.int().positive(),
  /** Printed on the cover when the data are invented. */
  demonstration: z.boolean(),
  model: ModelFacts,
  version: VersionFacts,
  signatures: z.array(Signature),
  conditions: z.array(Condition),
  texts: z.array(AuthorText),
  columns: z.array(ColumnLabel),
  evidence: z.array(EvidenceItem),
  specification: specificationSchema,
  result: resultSchema,
  /** The evidence that holds specification and result. */
  resultEvidence: cited,
  resultSha256: sha256,
  sourceFile: SourceFile.nullable(),
  waterfall: Waterfall.nullable(),
  windows: Windows.nullable(),
  outcomeCounts: OutcomeCounts.nullable(),
  sensitivity: Sensitivity.nullable(),
  /** Null where no dictionary was written. */
  dictionary: z.strictObject({ evidence: cited, lines: z.array(DictionaryLine) }).nullable(),
  quality: z.strictObject({ evidence: cited, rows: count, columns: z.array(ColumnQuality) }).nullable(),
  /** Null in versions frozen before permissions were kept with them. */
  protection: DocumentedProtection.nullable(),
  /** Null where no quality report was made. */
  qualityFlags: z.strictObject({ evidence: cited, madeAt: time, flags: z.array(RaisedFlag) }).nullable(),
  balance: Balance.nullable(),
  /** Null where nothing was counted; empty where no column has the role. */
  segments: z.strictObject({ evidence: cited, columns: z.array(Segment) }).nullable(),
  /** Null where none is stated, or where it was not kept. */
  priorCorrection: Correction.nullable(),
  /** Why declined applicants are inferred; null where it was not kept. */
  inferenceReason: z.strictObject({ evidence: cited, reason: z.string() }).nullable(),
  acceptsOnly: AcceptsOnly.nullable(),
  classing: z.strictObject({ evidence: cited, characteristics: z.array(ClassedCharacteristic) }).nullable(),
  outOfTime: OutOfTime,
  penaltyChoice: PenaltyChoice.nullable(),
  stability: Stability.nullable(),
  scoreDistributions: z.array(ScoreDistribution),
  bandCalibrations: z.array(BandCalibration),
  comparisons: z.array(PairedComparison),
  replications: z.array(Replication),
  validation: Validation.nullable(),
  history: z.array(HistoryEntry).nullable(),
  /** The chain's last link when the evidence was gathered. */
  recordHead: z.strictObject({ sequence: z.int(), hash: sha256 }),
});

/** Every evidence number named anywhere in the input, with its place. */
function citations(value: unknown, path: (string | number)[] = []): { number: string; path: (string | number)[] }[] {
  if (typeof value !== 'object' || value === null) return [];
  return Object.entries(value).flatMap(([key, inner]) => {
    const place = [...path, Array.isArray(value) ? Number(key) : key];
    const isCitation = key === 'evidence' || key === 'resultEvidence';
    return isCitation && typeof inner === 'string' ? [{ number: inner, path: place }] : citations(inner, place);
  });
}

export const DocumentInput = parts.superRefine((input, context) => {
  const known = new Set<string>();
  input.evidence.forEach((item, index) => {
    if (known.has(item.number))
      context.addIssue({ code: 'custom', path: ['evidence', index, 'number'], message: `${item.number} is listed twice.` });
    known.add(item.number);
  });
  for (const { number, path } of citations(input)) {
    if (!known.has(number)) context.addIssue({ code: 'custom', path, message: `${number} is not in the list of evidence.` });
  }
  const bins = new Map(input.result.characteristics.map(({ column, bins: listed }) => [column, listed.length]));
  input.classing?.characteristics.forEach((entry, index) => {
    for (const partition of ['holdOut', 'outOfTime'] as const) {
      const counts = entry[partition];
      if (counts !== null && counts.length !== bins.get(entry.column)) {
        context.addIssue({
          code: 'custom',
          path: ['classing', 'characteristics', index, partition],
          message: `"${entry.column}" has ${bins.get(entry.column) ?? 'no'} bins in the result and ${counts.length} here.`,
        });
      }
    }
  });
  input.scoreDistributions.forEach((entry, index) => {
    for (const side of ['goods', 'bads'] as const) {
      if (entry[side].length !== entry.edges.length - 1) {
        context.addIssue({
          code: 'custom',
          path: ['scoreDistributions', index, side],
          message: 'One count fewer than edges is wanted.',
        });
      }
    }
  });
  input.bandCalibrations.forEach((entry, index) => {
    if (entry.bands.length !== input.result.bands.length) {
      context.addIssue({
        code: 'custom',
        path: ['bandCalibrations', index, 'bands'],
        message: 'One entry for each band of the result is wanted.',
      });
    }
  });
});

export type DocumentInput = z.infer<typeof parts>;
export type EvidenceItem = z.infer<typeof EvidenceItem>;
export type AuthorText = z.infer<typeof AuthorText>;
export type Signature = z.infer<typeof Signature>;
export type Balance = z.infer<typeof Balance>;
export type Segment = z.infer<typeof Segment>;
export type AcceptsOnly = z.infer<typeof AcceptsOnly>;
export type Stability = z.infer<typeof Stability>;
export type Replication = z.infer<typeof Replication>;
export type ClassedCharacteristic = z.infer<typeof ClassedCharacteristic>;
export type ScoreDistribution = z.infer<typeof ScoreDistribution>;
export type BandCalibration = z.infer<typeof BandCalibration>;
