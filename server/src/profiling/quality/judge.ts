import type { ColumnProfile, ColumnRole } from '@tallystone/contracts/samples/columns';
import type { DefinedColumn } from '@tallystone/contracts/samples/definition';
import type { ColumnQualityDetail, QualityFlag, QualityMonth } from '@tallystone/contracts/samples/quality';
import { populationStability, stabilityCriticalValue, weightOfEvidence } from '@tallystone/numeric';
import { thin } from '../kind';
import { leakageValue } from '../leakage';
import type { ColumnMeasure } from './measure';

export type RaisedFlag = Omit<QualityFlag, 'answer'>;

export interface JudgedColumn {
  readonly detail: ColumnQualityDetail;
  readonly flags: RaisedFlag[];
}

/** Stability index: to 0.10 steady, above 0.25 changed (common practice; numerics are in `populationStability`). */
const changed = 0.25;
const shifted = 0.1;
/** Months with fewer rows are counted and not compared. */
const enoughRows = 100;
/** Of all months of a column together: how often one is called changed when none has. */
const falseAlarms = 0.05;
/** Rows that would be expected of the outcome that is not there: fewer may be absent by chance (e^-10 for a Poisson count). */
const expectedRows = 10;
/** Nearly all of an outcome in one group. */
const nearlyAll = 0.95;
/** A mistyped amount lies further out than skewness takes one (common practice). */
const farOut = 10;

/** Roles whose values are said to predict too well; what plays no part is told as worth knowing. */
const judged: Partial<Record<ColumnRole, 'look' | 'note'>> = { characteristic: 'look', segment: 'look', 'not used': 'note' };
/** Roles that change with time by what they are. */
const moves: readonly ColumnRole[] = ['application date', 'identifier', 'group key'];

/** What a careful analyst would want to know of one column, each in a sentence with its number. */
export function judgeColumn(
  profile: ColumnProfile,
  defined: DefinedColumn,
  measure: ColumnMeasure,
  months: readonly Pick<QualityMonth, 'month' | 'rows'>[],
  baselineMonths: number,
): JudgedColumn {
  const flags: RaisedFlag[] = fromProfile(profile, defined);
  const raise = (code: QualityFlag['code'], weight: QualityFlag['weight'], finding: string): void =>
    void flags.push({ column: profile.column, code, weight, finding });
  judgeOutliers(measure, profile.rows, raise);
  const stability = stabilityOf(measure, baselineMonths);
  const drift = moves.includes(defined.role) ? null : furthestMonth(measure, months, baselineMonths, stability);
  if (drift && drift.psi > drift.critical && drift.psi > shifted) {
    const weight = drift.psi > changed ? 'look' : 'note';
    raise('drift', weight, `PSI ${drift.psi.toFixed(2)} in ${drift.month} against the first year; by chance it would stay below ${drift.critical.toFixed(3)}.`);
  } // prettier-ignore
  judgeMissingByMonth(measure, months, baselineMonths, raise);
  const weight = judged[defined.role];
  const informationValue = weight ? valueOf(measure) : null;
  if (weight) judgeLeakage(measure, informationValue, (code, finding) => raise(code, weight, finding));
  return {
    flags,
    detail: {
      position: profile.position,
      column: profile.column,
      kind: defined.kind,
      role: defined.role,
      missing: measure.missing,
      special: measure.special,
      unreadable: measure.unreadable,
      distinct: profile.distinct,
      quantiles: measure.quantiles,
      outliers: measure.outliers,
      informationValue,
      drift,
      groups: measure.groups,
      histogram: measure.histogram,
      months: months.map(({ month, rows }, place) => ({
        month,
        rows,
        missing: missingIn(measure, measure.months[place]),
        psi: stability[place],
        groups: measure.months[place],
      })),
    },
  };
}

/** What reading raised, but for what is now known better: leakage by the confirmed outcome, codes by the definition. */
function fromProfile(profile: ColumnProfile, defined: DefinedColumn): RaisedFlag[] {
  const named = new Set(defined.special.flatMap(({ values }) => values.map(String)));
  const settled = profile.specialSuspects.every(({ value }) => named.has(value) || named.has(String(Number(value))));
  return profile.flags
    .filter(({ code }) => code !== 'possible-leakage' && !(code === 'special-code-suspected' && settled))
    .filter(({ code, values }) => code !== 'unreadable-numbers' || !values?.length || !values.every((text) => named.has(text)))
    .map((flag) => ({ column: profile.column, ...flag }));
}

type Raise = (code: QualityFlag['code'], weight: QualityFlag['weight'], finding: string) => void;

function judgeOutliers({ outliers, furthest }: ColumnMeasure, rows: number, raise: Raise): void {
  if (!outliers || !furthest || outliers.below + outliers.above === 0) return;
  const count = outliers.below + outliers.above;
  const share = ((100 * count) / rows).toFixed(count / rows < 0.001 ? 3 : 1);
  const weight = furthest.ranges > farOut && count <= 0.01 * rows ? 'look' : 'note';
  raise('outliers', weight, `${thin(count)} value${count === 1 ? '' : 's'} (${share} %) more than 3 interquartile ranges beyond a quartile (Tukey 1977); the furthest is ${plain(furthest.value)}.`);
} // prettier-ignore

/** Index of each month against the first ones; null within them, and where there is nothing to compare. */
function stabilityOf({ months, groups }: ColumnMeasure, baselineMonths: number): (number | null)[] {
  if (baselineMonths === 0 || groups.length < 2) return months.map(() => null);
  const base = sumOf(months.slice(0, baselineMonths), groups.length);
  if (total(base) === 0) return months.map(() => null);
  return months.map((counts, place) => {
    if (place < baselineMonths || total(counts) === 0) return null;
    // Half a row more in each group where one is empty on one side: the index has no value there otherwise.
    return populationStability(base, counts) ?? populationStability(base, counts, 0.5);
  });
}

function furthestMonth(
  { months, groups }: ColumnMeasure,
  known: readonly Pick<QualityMonth, 'month'>[],
  baselineMonths: number,
  stability: readonly (number | null)[],
): ColumnQualityDetail['drift'] {
  const base = total(sumOf(months.slice(0, baselineMonths), groups.length));
  const compared = stability.flatMap((psi, place) => (psi === null || total(months[place]) < enoughRows ? [] : [{ psi, place }]));
  if (base < enoughRows || compared.length === 0) return null;
  const { psi, place } = compared.reduce((furthest, one) => (one.psi > furthest.psi ? one : furthest));
  const critical = stabilityCriticalValue(base, total(months[place]), groups.length, 1 - falseAlarms / compared.length);
  return { month: known[place].month, psi, critical };
}

function judgeMissingByMonth(
  measure: ColumnMeasure,
  known: readonly Pick<QualityMonth, 'month'>[],
  baselineMonths: number,
  raise: Raise,
): void {
  const base = sumOf(measure.months.slice(0, baselineMonths), measure.groups.length);
  if (total(base) < enoughRows) return;
  const before = missingIn(measure, base) / total(base);
  let furthest = { month: '', share: before };
  measure.months.forEach((counts, place) => {
    if (place < baselineMonths || total(counts) < enoughRows) return;
    const share = missingIn(measure, counts) / total(counts);
    if (Math.abs(share - before) > Math.abs(furthest.share - before)) furthest = { month: known[place].month, share };
  });
  if (Math.abs(furthest.share - before) > 0.1)
    raise('missing-drift', 'look', `Missing in ${percent(furthest.share)} of the rows of ${furthest.month}, in ${percent(before)} of the first year.`);
} // prettier-ignore

/** Information value over the groups; null without both outcomes. */
function valueOf({ groups }: ColumnMeasure): number | null {
  const known = groups.filter(({ goods, bads }) => goods + bads > 0);
  const [goods, bads] = [known.map((group) => group.goods), known.map((group) => group.bads)];
  if (total(goods) === 0 || total(bads) === 0 || known.length < 2) return null;
  return weightOfEvidence(goods, bads, { amount: 0.5, when: 'zero-cell' }).informationValue;
}

function judgeLeakage(
  { groups }: ColumnMeasure,
  informationValue: number | null,
  raise: (code: QualityFlag['code'], finding: string) => void,
): void {
  const goods = groups.reduce((sum, group) => sum + group.goods, 0);
  const bads = groups.reduce((sum, group) => sum + group.bads, 0);
  if (goods === 0 || bads === 0) return;
  if (informationValue !== null && informationValue > leakageValue)
    raise('leakage-value', `Information value ${informationValue.toFixed(2)}: it predicts very well. Was it known when the application was decided?`);
  const badRate = bads / (goods + bads);
  const missing = groups.find(({ kind }) => kind === 'missing');
  const known = missing ? missing.goods + missing.bads : 0;
  if (missing && missing.goods === 0 && known * (1 - badRate) >= expectedRows)
    raise('missing-one-outcome', `Missing only for bads: ${thin(known)} rows, of which ${thin(Math.round(known * (1 - badRate)))} would be good if it were missing by chance.`);
  if (missing && missing.bads === 0 && known * badRate >= expectedRows)
    raise('missing-one-outcome', `Missing only for goods: ${thin(known)} rows, of which ${thin(Math.round(known * badRate))} would be bad if it were missing by chance.`);
  const ofGoods = groups.reduce((most, group) => (group.goods > most.goods ? group : most));
  const ofBads = groups.reduce((most, group) => (group.bads > most.bads ? group : most));
  if (ofGoods !== ofBads && ofGoods.goods >= nearlyAll * goods && ofBads.bads >= nearlyAll * bads)
    raise('one-value-per-outcome', `Almost one value per outcome: “${ofGoods.label}” for ${percent(ofGoods.goods / goods)} of the goods, “${ofBads.label}” for ${percent(ofBads.bads / bads)} of the bads.`);
} // prettier-ignore

/** What concerns the file as a whole. */
export function judgeFile(
  rows: number,
  duplicateRows: number,
  months: readonly Pick<QualityMonth, 'month' | 'rows'>[],
): RaisedFlag[] {
  const flags: RaisedFlag[] = [];
  if (duplicateRows > 0) {
    const share = percent(duplicateRows / rows);
    flags.push({ column: null, code: 'duplicate-rows', weight: 'look', finding: `${thin(duplicateRows)} row${duplicateRows === 1 ? ' equals' : 's equal'} an earlier one in every column (${share}).` });
  } // prettier-ignore
  const empty = months.filter((month) => month.rows === 0);
  if (empty.length > 0) {
    const listed = empty.slice(0, 6).map(({ month }) => month).join(', '); // prettier-ignore
    flags.push({
      column: null,
      code: 'months-without-rows',
      weight: 'look',
      finding: `No application in ${empty.length === 1 ? listed : `${empty.length} months: ${listed}${empty.length > 6 ? ' …' : ''}`}.`,
    });
  }
  return flags;
}

const missingIn = ({ groups }: ColumnMeasure, counts: readonly number[]): number =>
  counts.reduce((sum, count, place) => sum + (groups[place].kind === 'missing' ? count : 0), 0);
const total = (counts: readonly number[]): number => counts.reduce((sum, count) => sum + count, 0);
const sumOf = (months: readonly (readonly number[])[], length: number): number[] =>
  Array.from({ length }, (_, place) => months.reduce((sum, counts) => sum + counts[place], 0));
const percent = (share: number): string => `${(100 * share).toFixed(1)} %`;
const plain = (value: number): string =>
  (Number.isInteger(value) ? thin(value) : String(Number(value.toPrecision(6)))).replace('-', '\u2212');
