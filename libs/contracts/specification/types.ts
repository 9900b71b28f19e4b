/**
 * The specification: everything needed to replay a fit from the raw file. Pure types, no zod: safe for the browser's first load.
 * These are the *complete* forms, with every default applied; what a file may leave out is said in schema.ts and docs/specification.md.
 */

export type Encoding = 'utf-8' | 'utf-16le' | 'utf-16be' | 'windows-1252';

/** In which order the parts of a date stand. Year, month, day means ISO dates alone. */
export type DateOrder = 'year-month-day' | 'day-month-year' | 'month-day-year';

/** What a date with a time is: a text like any other, or its day. */
export type DateTimes = 'text' | 'day';

/** How the raw file is read. */
export interface DataReading {
  /** SHA-256 of the file's bytes, lower-case hexadecimal; null = not tied to one file. */
  sha256: string | null;
  /** One character. */
  delimiter: string;
  encoding: Encoding;
  decimal: '.' | ',';
  /** One character, or null: no thousands sign is accepted. */
  thousands: string | null;
  /** Blanks and tabs around unquoted fields are removed. */
  trim: boolean;
  /** Texts that mean "missing", in every column. */
  missing: string[];
  /** Only ISO dates are dates when left out. An optional extension of the format. */
  dateOrder?: DateOrder | undefined;
  /** Dates with a time stay texts when left out. An optional extension of the format. */
  dateTimes?: DateTimes | undefined;
  /** Columns whose texts stay as they are, whatever form of a date they have. An optional extension of the format. */
  notDates?: string[] | undefined;
}

/**
 * A test on one column. Several keys must all hold. A missing value passes only `missing: true`.
 * The four limits are numbers, or ISO dates (YYYY-MM-DD) for a column of ISO dates.
 */
export interface ColumnTest {
  column: string;
  in?: string[];
  notIn?: string[];
  below?: number | string;
  atMost?: number | string;
  above?: number | string;
  atLeast?: number | string;
  missing?: boolean;
}

export type RowTest = ColumnTest | { all: RowTest[] } | { any: RowTest[] };

/** A row counts at the first rule that takes it out. */
export type Exclusion = { reason: string } & RowTest;

/** Which texts of the outcome column mean what. The four lists are disjoint. */
export interface OutcomeByValues {
  column: string;
  good: string[];
  bad: string[];
  indeterminate: string[];
  excluded: string[];
}

/**
 * The outcome from how late an account was, and for how long it was seen: too few months on book are excluded; then days past due of at least
 * `bad` are bad, from `indeterminate` to below `bad` indeterminate, fewer good. An optional extension of the format.
 */
export interface OutcomeByRule {
  daysPastDue: {
    column: string;
    bad: number;
    /** Null: nothing is indeterminate. */
    indeterminate: number | null;
    /** What a row is whose days past due (or months on book) are missing: a problem, or excluded. */
    missing: 'refuse' | 'excluded';
  };
  /** Null: nobody is excluded for want of months. */
  monthsOnBook: { column: string; least: number } | null;
}

export type OutcomeDefinition = OutcomeByValues | OutcomeByRule;

export type DeclinedMethod = 'none' | 'reweighting' | 'parcelling' | 'fuzzy';

export interface DeclinedTreatment {
  column: string;
  values: string[];
  method: DeclinedMethod;
  /** Score bands of parcelling. */
  bands: number;
  /** Factor on a band's bad rate in parcelling. */
  uplift: number;
}

export interface PartitionByColumn {
  column: string;
  development: string[];
  holdOut: string[];
  outOfTime: string[];
}

/**
 * What a group is drawn by: its value, which is the default, or the number of its first row in the file, where the value is not to be known (identifiers
 * that are kept as hashes). An optional extension of the format.
 */
export type GroupsBy = 'value' | 'first-row';

export interface PartitionBySeed {
  seed: number;
  /** Share of goods and of bads, each rounded, that become hold-out. */
  holdOutShare: number;
  /** A column whose values stay together, in development or in hold-out. An optional extension of the format. */
  groups?: string | undefined;
  groupsBy?: GroupsBy | undefined;
  /** Rows whose ISO date lies in [from, to], both ends included, null = open. */
  outOfTime: { column: string; from: string | null; to: string | null } | null;
}

export type Partition = PartitionByColumn | PartitionBySeed;

/** `bin`: "own", or the index (from 0) of a bin of the cuts or groups to join. */
export interface SpecialValue<Value> {
  label: string;
  values: Value[];
  bin: 'own' | number;
}

export type Trend = 'any' | 'rising' | 'falling' | 'one-peak' | 'one-valley';

export interface AutomaticClassing {
  made: 'automatic';
  fineClasses: number;
  smallestShare: number;
  smallestGoods: number;
  smallestBads: number;
  mostBins: number;
  smallestDifference: number;
  trend: Trend;
  /** The trend was chosen by cross-validated deviance, so that folds with classing "cuts" choose it again; as stated when left out. */
  trendBy?: 'cross-validation' | undefined;
  /** The largest information value when left out. */
  criterion?: 'information value' | 'deviance' | undefined;
}

export type Classing = AutomaticClassing | { made: 'by hand' };

interface CharacteristicSettings {
  column: string;
  /** 0 = always kept, unpenalised. */
  penaltyMultiplier: number;
  /** Limits on the coefficient(s), lower <= 0 <= upper, in the ln(good:bad) orientation. */
  lower: number | null;
  upper: number | null;
}

export interface NumericCharacteristic extends CharacteristicSettings {
  kind: 'numeric';
  coding: 'woe' | 'indicator';
  /** Cuts, strictly ascending. k cuts make k + 1 bins. */
  edges: number[];
  closed: 'left' | 'right';
  /** A text is a code that is no number in the file ("NTC"). */
  special: SpecialValue<number | string>[];
  missing: 'own' | 'refuse' | number;
  classing: Classing;
}

export interface CategoricalCharacteristic extends CharacteristicSettings {
  kind: 'categorical';
  coding: 'woe' | 'indicator';
  groups: string[][];
  special: SpecialValue<string>[];
  missing: 'own' | 'refuse' | number;
  /** Where a category that is not listed goes: WOE 0, or a bin. */
  unseen: 'neutral' | number;
  classing: Classing;
}

/** The value itself enters the fit: never part of a scorecard. */
export interface LinearCharacteristic extends CharacteristicSettings {
  kind: 'numeric';
  coding: 'linear';
  missing: 'refuse';
}

export type BinnedCharacteristic = NumericCharacteristic | CategoricalCharacteristic;
export type Characteristic = BinnedCharacteristic | LinearCharacteristic;

export interface WoeSettings {
  smoothing: number;
  when: 'zero-cell' | 'always' | 'never';
}

export type LambdaChoice = { value: number } | { grid: number[] } | { count: number; smallestRatio: number; earlyStop: boolean };

export type FoldClassing = 'once' | 'woe' | 'cuts';

export type Folds =
  { count: number; seed: number; groups: string | null; groupsBy?: GroupsBy | undefined; classing: FoldClassing } | { column: string; classing: FoldClassing };

export type PenaltyRule = 'value' | 'minimum' | 'one-standard-error';

export interface FitSettings {
  /** One mixing, or several of which cross-validation picks one. */
  mixing: number | number[];
  standardize: boolean;
  lambda: LambdaChoice;
  choose: PenaltyRule;
  folds: Folds | null;
  refit: 'kept' | 'all-rows' | null;
}

export interface Scaling {
  pointsToDouble: number;
  baseScore: number;
  baseOdds: number;
  intercept: 'spread' | 'base';
  rounding: 'nearest';
}

/** Lower-closed edges of the unrounded score, or quantiles of development. */
export type Bands = number[] | { quantiles: number };

export interface Reasons {
  baseline: 'mean' | 'cut-off' | 'largest';
  most: number;
  texts: Record<string, string>;
}

/** `at`: ISO 8601. */
export interface ColumnPermission {
  column: string;
  citation: string;
  by: string;
  at: string;
}

export interface Specification {
  format: 'tallystone-specification';
  formatVersion: 1;
  title: string | null;
  data: DataReading;
  exclusions: Exclusion[];
  outcome: OutcomeDefinition;
  declined: DeclinedTreatment | null;
  weight: { column: string } | null;
  priorCorrection: { populationBadRate: number } | null;
  partition: Partition;
  characteristics: Characteristic[];
  woe: WoeSettings;
  fit: FitSettings;
  recalibration: { on: 'holdOut' } | null;
  scaling: Scaling;
  bands: Bands;
  psi: { smoothing: number };
  reasons: Reasons;
  cutOff: number | null;
  /** Protected characteristics that compliance permitted, as they stood when the version was frozen. An optional extension of the format; replaying does not depend on it. */
  permissions?: ColumnPermission[] | undefined;
}

/** One thing that is wrong, with its place. `where.path` is a JSON path such as `characteristics[2].edges`. */
export interface SpecificationProblem {
  code: string;
  message: string;
  where: { path: string };
}
