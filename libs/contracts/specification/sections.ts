import { z } from 'zod';
import { characteristicSchema, MOST_BINS } from './characteristic';
import { alternative, checked, has, repeated } from './issues';
import { columnName, finite, isoDate, seed, texts } from './primitives';
import type {
  Bands,
  ColumnPermission,
  ColumnTest,
  DataReading,
  DeclinedTreatment,
  Exclusion,
  FitSettings,
  Folds,
  LambdaChoice,
  OutcomeByRule,
  OutcomeByValues,
  OutcomeDefinition,
  Partition,
  PartitionByColumn,
  PartitionBySeed,
  Reasons,
  RowTest,
  Scaling,
  WoeSettings,
} from './types';

/** One schema per top-level key of the specification, each with its default. */

const oneCharacter = z.string().refine((text) => [...text].length === 1 && text.length === 1, 'expected one character');

const data: z.ZodType<DataReading, unknown> = checked<DataReading>(
  z.strictObject({
    sha256: z
      .string()
      .regex(/^[0-9a-f]{64}$/, 'expected 64 lower-case hexadecimal digits')
      .nullable()
      .default(null),
    delimiter: oneCharacter
      .refine((text) => !'"\r\n'.includes(text), 'a quote or a line end cannot be the delimiter')
      .default(','),
    encoding: z.enum(['utf-8', 'utf-16le', 'utf-16be', 'windows-1252']).default('utf-8'),
    decimal: z.enum(['.', ',']).default('.'),
    thousands: oneCharacter
      .refine((text) => !/[0-9+\-eE"\r\n]/.test(text), 'a digit, a sign, "e", a quote or a line end cannot be the thousands sign')
      .nullable()
      .default(null),
    trim: z.boolean().default(true),
    missing: texts.default(['', 'NA']),
    // No default is written in: a specification from before this key keeps its fingerprint.
    dateOrder: z.enum(['year-month-day', 'day-month-year', 'month-day-year']).optional(),
    dateTimes: z.enum(['text', 'day']).optional(),
    notDates: z.array(columnName).min(1).optional(),
  }),
  (value, report) => {
    if (value.thousands === value.decimal)
      report(['thousands'], 'same-sign', 'The thousands sign and the decimal sign are the same.');
  },
);

const limit = alternative<number | string>((value) => (typeof value === 'string' ? isoDate : finite));

const columnTest = checked<ColumnTest & { reason?: string }>(
  z.strictObject({
    reason: z.string().min(1).optional(),
    column: columnName,
    in: texts.min(1).optional(),
    notIn: texts.min(1).optional(),
    below: limit.optional(),
    atMost: limit.optional(),
    above: limit.optional(),
    atLeast: limit.optional(),
    missing: z.boolean().optional(),
  }),
  (value, report) => {
    const tests = ['in', 'notIn', 'below', 'atMost', 'above', 'atLeast', 'missing'] as const;
    if (tests.every((test) => value[test] === undefined)) {
      report([], 'no-test', 'The rule names a column but no test: in, notIn, below, atMost, above, atLeast or missing.');
    }
    const kinds = new Set(
      [value.below, value.atMost, value.above, value.atLeast].filter((x) => x !== undefined).map((x) => typeof x),
    );
    if (kinds.size > 1) report([], 'mixed-limits', 'The limits of one rule are either all numbers or all dates.');
  },
);

function rowTest(withReason: boolean): z.ZodType<RowTest, unknown> {
  const reason = withReason ? { reason: z.string().min(1) } : {};
  const nested = z.lazy(() => z.array(rowTest(false)).min(1));
  return alternative<RowTest>((value) => {
    if (has(value, 'all')) return z.strictObject({ ...reason, all: nested });
    if (has(value, 'any')) return z.strictObject({ ...reason, any: nested });
    return checked<ColumnTest>(columnTest, (test, report) => {
      if (withReason && !has(test, 'reason')) report(['reason'], 'missing-key', 'An exclusion needs its reason.');
      if (!withReason && has(test, 'reason')) report(['reason'], 'unknown-key', 'The reason belongs to the rule as a whole.');
    });
  });
}

const outcomeByValues = checked<OutcomeByValues>(
  z.strictObject({
    column: columnName,
    good: texts.min(1),
    bad: texts.min(1),
    indeterminate: texts.default([]),
    excluded: texts.default([]),
  }),
  (value, report) => {
    for (const text of repeated([...value.good, ...value.bad, ...value.indeterminate, ...value.excluded])) {
      report([], 'listed-twice', `The outcome value ${JSON.stringify(text)} is listed more than once.`);
    }
  },
);

const days = finite.nonnegative();

const outcomeByRule = checked<OutcomeByRule>(
  z.strictObject({
    daysPastDue: z.strictObject({
      column: columnName,
      bad: finite.positive(),
      indeterminate: days.nullable().default(null),
      missing: z.enum(['refuse', 'excluded']).default('refuse'),
    }),
    monthsOnBook: z.strictObject({ column: columnName, least: finite.positive() }).nullable().default(null),
  }),
  ({ daysPastDue, monthsOnBook }, report) => {
    if (daysPastDue.indeterminate !== null && daysPastDue.indeterminate >= daysPastDue.bad)
      report(['daysPastDue', 'indeterminate'], 'not-ascending', 'Indeterminate begins below the days past due from which a row is bad.');
    if (monthsOnBook?.column === daysPastDue.column)
      report(['monthsOnBook', 'column'], 'listed-twice', `"${daysPastDue.column}" cannot hold days past due and months on book.`);
  },
);

const outcome = alternative<OutcomeDefinition>((value) => (has(value, 'daysPastDue') ? outcomeByRule : outcomeByValues));

const declined: z.ZodType<DeclinedTreatment, unknown> = z.strictObject({
  column: columnName,
  values: texts.min(1),
  method: z.enum(['none', 'reweighting', 'parcelling', 'fuzzy']),
  bands: z.number().int().min(2).max(100).default(10),
  uplift: finite.positive().default(1.5),
});

const groupsBy = z.enum(['value', 'first-row']);

const partitionByColumn = checked<PartitionByColumn>(
  z.strictObject({ column: columnName, development: texts.min(1), holdOut: texts.default([]), outOfTime: texts.default([]) }),
  (value, report) => {
    for (const text of repeated([...value.development, ...value.holdOut, ...value.outOfTime])) {
      report([], 'listed-twice', `The partition value ${JSON.stringify(text)} is listed more than once.`);
    }
  },
);

const partitionBySeed = checked<PartitionBySeed>(
  z.strictObject({
    seed,
    holdOutShare: finite.min(0).lt(1),
    // No default is written in: a specification from before this key keeps its fingerprint.
    groups: columnName.optional(),
    groupsBy: groupsBy.optional(),
    outOfTime: z
      .strictObject({ column: columnName, from: isoDate.nullable().default(null), to: isoDate.nullable().default(null) })
      .nullable()
      .default(null),
  }),
  (value, report) => {
    const { from, to } = value.outOfTime ?? { from: null, to: null };
    if (from !== null && to !== null && from > to)
      report(['outOfTime'], 'not-ascending', 'The out-of-time period ends before it begins.');
  },
);

const partition = alternative<Partition>((value) => (has(value, 'column') ? partitionByColumn : partitionBySeed));

const woe: z.ZodType<WoeSettings, unknown> = z.strictObject({
  smoothing: finite.nonnegative().default(0.5),
  when: z.enum(['zero-cell', 'always', 'never']).default('zero-cell'),
});

const grid = checked<{ grid: number[] }>(
  z.strictObject({ grid: z.array(finite.nonnegative()).min(1).max(1000) }),
  (value, report) => {
    value.grid.forEach((lambda, index) => {
      if (index > 0 && !(lambda < value.grid[index - 1])) {
        report(['grid', index], 'not-descending', `Penalty ${lambda} is not below the one before it, ${value.grid[index - 1]}.`);
      }
    });
  },
);

const lambda = alternative<LambdaChoice>((value) => {
  if (has(value, 'value')) return z.strictObject({ value: finite.nonnegative() });
  if (has(value, 'grid')) return grid;
  return z.strictObject({
    count: z.number().int().min(1).max(1000),
    smallestRatio: finite.positive().lt(1).default(0.0001),
    earlyStop: z.boolean().default(true),
  });
});

const foldClassing = z.enum(['once', 'woe', 'cuts']).default('once');

const folds = alternative<Folds>((value) =>
  has(value, 'column')
    ? z.strictObject({ column: columnName, classing: foldClassing })
    : z.strictObject({
        count: z.number().int().min(2).max(MOST_BINS),
        seed,
        groups: columnName.nullable().default(null),
        groupsBy: groupsBy.optional(),
        classing: foldClassing,
      }),
);

const mixing = finite.min(0).max(1);

const fit = checked<FitSettings>(
  z.strictObject({
    mixing: alternative<number | number[]>((value) => (Array.isArray(value) ? z.array(mixing).min(1) : mixing)),
    standardize: z.boolean().default(true),
    lambda,
    choose: z.enum(['value', 'minimum', 'one-standard-error']).default('value'),
    folds: folds.nullable().default(null),
    refit: z.enum(['kept', 'all-rows']).nullable().default(null),
  }),
  (value, report) => {
    if (value.choose !== 'value' && value.folds === null) {
      report(['folds'], 'needs-folds', `Choosing by "${value.choose}" needs cross-validation: state folds.`);
    }
    if (Array.isArray(value.mixing)) {
      if (value.mixing.length > 1 && value.choose === 'value') {
        report(['mixing'], 'needs-rule', 'Several mixings need "choose": "minimum" or "one-standard-error".');
      }
      for (const twice of repeated(value.mixing)) report(['mixing'], 'listed-twice', `Mixing ${twice} is listed more than once.`);
    }
  },
);

const scaling: z.ZodType<Scaling, unknown> = z.strictObject({
  pointsToDouble: finite.positive().default(25),
  baseScore: finite.default(500),
  baseOdds: finite.positive().default(16),
  intercept: z.enum(['spread', 'base']).default('spread'),
  rounding: z.literal('nearest').default('nearest'),
});

const bandEdges = z.array(finite).superRefine((edges, context) => {
  edges.forEach((edge, index) => {
    if (index > 0 && !(edge > edges[index - 1])) {
      context.addIssue({
        code: 'custom',
        path: [index],
        message: `Band edge ${edge} is not above the edge before it, ${edges[index - 1]}.`,
        params: { code: 'not-ascending' },
      });
    }
  });
});

/** Absent and null alike mean the tenths of development. */
const bands = alternative<Bands>((value) => {
  if (Array.isArray(value)) return bandEdges;
  if (value === null || value === undefined) return z.unknown().transform((): Bands => ({ quantiles: 10 }));
  return z.strictObject({ quantiles: z.number().int().min(2).max(100) });
});

const reasons: z.ZodType<Reasons, unknown> = z.strictObject({
  baseline: z.enum(['mean', 'cut-off', 'largest']).default('mean'),
  most: z.number().int().min(1).max(MOST_BINS).default(4),
  texts: z.record(z.string(), z.string()).default({}),
});

const weight = z.strictObject({ column: columnName });
const priorCorrection = z.strictObject({ populationBadRate: finite.gt(0).lt(1) });
const permission: z.ZodType<ColumnPermission, unknown> = z.strictObject({
  column: columnName,
  citation: z.string().min(1),
  by: z.string().min(1),
  at: z.iso.datetime({ offset: true }),
});
const recalibration = z.strictObject({ on: z.literal('holdOut') });

/** `optional: true` = the key may be absent; the section's schema then sees `whenAbsent`. */
export const sections = {
  format: { schema: z.literal('tallystone-specification'), required: true },
  formatVersion: { schema: z.literal(1), required: true },
  title: { schema: z.string().nullable(), required: false, whenAbsent: null },
  data: { schema: data, required: false, whenAbsent: {} },
  exclusions: { schema: z.array(rowTest(true) as z.ZodType<Exclusion, unknown>), required: false, whenAbsent: [] },
  outcome: { schema: outcome, required: true },
  declined: { schema: declined.nullable(), required: false, whenAbsent: null },
  weight: { schema: weight.nullable(), required: false, whenAbsent: null },
  priorCorrection: { schema: priorCorrection.nullable(), required: false, whenAbsent: null },
  partition: { schema: partition, required: true },
  characteristics: { schema: z.array(characteristicSchema).min(1).max(10_000), required: true },
  woe: { schema: woe, required: false, whenAbsent: {} },
  fit: { schema: fit, required: true },
  recalibration: { schema: recalibration.nullable(), required: false, whenAbsent: null },
  scaling: { schema: scaling, required: false, whenAbsent: {} },
  bands: { schema: bands, required: false, whenAbsent: null },
  psi: { schema: z.strictObject({ smoothing: finite.nonnegative().default(0) }), required: false, whenAbsent: {} },
  reasons: { schema: reasons, required: false, whenAbsent: {} },
  cutOff: { schema: finite.nullable(), required: false, whenAbsent: null },
  // No default is written in: a specification from before this key keeps its fingerprint.
  permissions: { schema: z.array(permission).min(1).optional(), required: false },
} as const;
