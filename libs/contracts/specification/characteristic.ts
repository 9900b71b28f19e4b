import { z } from 'zod';
import { alternative, checked, has, repeated, type Report } from './issues';
import { columnName, finite } from './primitives';
import type {
  AutomaticClassing,
  CategoricalCharacteristic,
  Characteristic,
  Classing,
  LinearCharacteristic,
  NumericCharacteristic,
  SpecialValue,
} from './types';

/** One characteristic: bins, coding, penalty. At most 250 bins, so that a code fits one byte with room for "not in any bin". */
export const MOST_BINS = 250;

const settings = {
  column: columnName,
  penaltyMultiplier: finite.nonnegative().default(1),
  lower: finite.max(0).nullable().default(null),
  upper: finite.min(0).nullable().default(null),
};

const binIndex = z.number().int().nonnegative();

/** "own" and other words, or the index of a bin. */
const wordOrBin = <Word extends string>(words: readonly [Word, ...Word[]]): z.ZodType<Word | number, unknown> =>
  alternative<Word | number>((value) => (typeof value === 'number' ? binIndex : z.enum(words)));

const special = <Value>(value: z.ZodType<Value, unknown>): z.ZodType<SpecialValue<Value>[], unknown> =>
  z.array(z.strictObject({ label: z.string().min(1), values: z.array(value).min(1), bin: wordOrBin(['own']) }));

const automatic: z.ZodType<AutomaticClassing, unknown> = z.strictObject({
  made: z.literal('automatic'),
  fineClasses: z.number().int().min(2).max(MOST_BINS).default(100),
  smallestShare: finite.min(0).max(0.5).default(0.05),
  smallestGoods: finite.nonnegative().default(20),
  smallestBads: finite.nonnegative().default(20),
  mostBins: z.number().int().min(1).max(MOST_BINS).default(8),
  smallestDifference: finite.nonnegative().default(0.05),
  trend: z.enum(['any', 'rising', 'falling', 'one-peak', 'one-valley']).default('any'),
  // No default is written in: a specification from before this key keeps its fingerprint.
  trendBy: z.enum(['cross-validation']).optional(),
  criterion: z.enum(['information value', 'deviance']).optional(),
});

const byHand = z.strictObject({ made: z.literal('by hand') });

const classing: z.ZodType<Classing, unknown> = alternative<Classing>((value) => {
  if (has(value, 'made') && (value as { made: unknown }).made === 'by hand') return byHand;
  return automatic;
});

function checkBins(
  value: { special: SpecialValue<number | string>[]; missing: string | number; unseen?: string | number },
  bins: number,
  what: string,
  report: Report,
): void {
  const inRange = (bin: number | string, path: (string | number)[]): void => {
    if (typeof bin === 'number' && bin >= bins) {
      report(path, 'no-such-bin', `Bin ${bin} does not exist: the ${what} make bins 0 to ${bins - 1}.`);
    }
  };
  value.special.forEach((entry, index) => inRange(entry.bin, ['special', index, 'bin']));
  inRange(value.missing, ['missing']);
  if (value.unseen !== undefined) inRange(value.unseen, ['unseen']);
  for (const text of repeated(value.special.flatMap((entry) => entry.values))) {
    report(['special'], 'listed-twice', `The special value ${JSON.stringify(text)} is listed more than once.`);
  }
  const own = value.special.filter((entry) => entry.bin === 'own').length + (value.missing === 'own' ? 1 : 0);
  if (bins + own > MOST_BINS) report([], 'too-many-bins', `${bins + own} bins are more than the ${MOST_BINS} one byte can hold.`);
}

const numeric = checked<NumericCharacteristic>(
  z.strictObject({
    ...settings,
    kind: z.literal('numeric'),
    coding: z.enum(['woe', 'indicator']).default('woe'),
    edges: z.array(finite),
    closed: z.enum(['left', 'right']).default('left'),
    special: special(alternative<number | string>((value) => (typeof value === 'string' ? z.string().min(1) : finite))).default([]),
    missing: wordOrBin(['own', 'refuse']).default('own'),
    classing: classing.default({ made: 'by hand' }),
  }),
  (value, report) => {
    value.edges.forEach((edge, index) => {
      if (index > 0 && !(edge > value.edges[index - 1])) {
        report(['edges', index], 'not-ascending', `Edge ${edge} is not above the edge before it, ${value.edges[index - 1]}.`);
      }
    });
    for (const code of value.special.flatMap((entry) => entry.values)) {
      if (typeof code === 'string' && code.trim() !== '' && Number.isFinite(Number(code)))
        report(['special'], 'special-is-number', `The special value ${JSON.stringify(code)} is a number: give it as one, without quotes.`);
    }
    checkBins(value, value.edges.length + 1, 'edges', report);
  },
);

const categorical = checked<CategoricalCharacteristic>(
  z.strictObject({
    ...settings,
    kind: z.literal('categorical'),
    coding: z.enum(['woe', 'indicator']).default('woe'),
    groups: z.array(z.array(z.string()).min(1)).min(1),
    special: special(z.string()).default([]),
    missing: wordOrBin(['own', 'refuse']).default('own'),
    unseen: wordOrBin(['neutral']).default('neutral'),
    classing: classing.default({ made: 'by hand' }),
  }),
  (value, report) => {
    const listed = [...value.groups.flat(), ...value.special.flatMap((entry) => entry.values)];
    for (const text of repeated(listed)) {
      report(['groups'], 'listed-twice', `The category ${JSON.stringify(text)} is listed more than once.`);
    }
    checkBins(value, value.groups.length, 'groups', report);
  },
);

const linear: z.ZodType<LinearCharacteristic, unknown> = z.strictObject({
  ...settings,
  kind: z.literal('numeric'),
  coding: z.literal('linear'),
  missing: z.literal('refuse', 'A "linear" characteristic has no bin for missing values: state "missing": "refuse".'),
});

const unknownKind = z.strictObject({ kind: z.enum(['numeric', 'categorical']) });

export const characteristicSchema: z.ZodType<Characteristic, unknown> = alternative<Characteristic>((value) => {
  const { kind, coding } = (typeof value === 'object' && value !== null ? value : {}) as { kind?: unknown; coding?: unknown };
  if (kind === 'categorical') return categorical;
  if (kind === 'numeric') return coding === 'linear' ? linear : numeric;
  return unknownKind.loose() as unknown as z.ZodType<Characteristic, unknown>;
});
