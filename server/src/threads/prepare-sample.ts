import type { DefinitionCounts, RuleCounts, SampleDefinitionContent, WaterfallStep } from '@tallystone/contracts/samples/definition';
import { isByRule } from '@tallystone/contracts/specification/outcome';
import type { ResultCounts } from '@tallystone/contracts/result/types';
import { Columns } from '../replay/columns';
import { prepare } from '../replay/prepare';
import { ReplayError, type ReplayProblem } from '../replay/problems';
import type { SourceColumn } from '../replay/source';
import { type IndeterminateCase, indeterminateCases } from '../replay/indeterminates';
import { type OutcomeReader, TOO_FEW_MONTHS, outcomeReader } from '../replay/outcome';
import { BAD, DEVELOPMENT, GOOD, HOLD_OUT, OUT_OF_TIME, type Prepared } from '../replay/types';
import type { Task } from './task';

export interface PreparePayload {
  readonly content: SampleDefinitionContent;
  readonly rows: number;
  readonly columns: ReadonlyMap<string, SourceColumn>;
}

export type PrepareAnswer =
  | { readonly problems: readonly ReplayProblem[] }
  | {
      readonly problems: null;
      readonly prepared: Pick<Prepared, 'partition' | 'outcome' | 'exclusion' | 'weights'>;
      readonly result: ResultCounts;
      /** With the outcome of out-of-time; covering it is for whoever shows it. */
      readonly counts: DefinitionCounts;
    };

/** Carries out a definition on its rows, off the event loop: every problem of the rows, or who is in which partition with the waterfall. */
export const prepareSample: Task<PreparePayload, PrepareAnswer> = ({ content, rows, columns }) => {
  try {
    const source = { rows, column: (name: string) => columns.get(name) };
    const prepared = prepare(content, source);
    const { partition, outcome, exclusion, weights, counts } = prepared;
    return {
      problems: null,
      prepared: { partition, outcome, exclusion, weights },
      result: counts,
      counts: describe(content, prepared, columns, indeterminateCases(content, prepared, source)),
    };
  } catch (error) {
    if (error instanceof ReplayError) return { problems: error.problems };
    throw error;
  }
};

const badRate = (goods: number, bads: number): number | null => (goods + bads === 0 ? null : bads / (goods + bads));

function describe(
  content: SampleDefinitionContent,
  prepared: Prepared,
  columns: ReadonlyMap<string, SourceColumn>,
  cases: readonly IndeterminateCase[],
): DefinitionCounts {
  const { counts } = prepared;
  const reader = outcomeReader(content.outcome, new Columns({ rows: prepared.rows, column: (name) => columns.get(name) }, content.data));
  if (reader === null) throw new Error('A sample that was prepared has the columns of its outcome');
  const goodsOut = counts.excluded.map(() => 0);
  prepared.exclusion.forEach((rule, row) => {
    if (rule > 0 && reader.says(row) === GOOD) goodsOut[rule - 1]++;
  });

  const byOutcome = (place: number): boolean => place >= content.exclusions.length;
  // Rows that the outcome excludes, and declined ones, are neither good nor bad.
  const parts = [counts.development, counts.holdOut, counts.outOfTime];
  const known = (partGoods: number, what: 'goods' | 'bads'): number => parts.reduce((sum, part) => sum + part[what], partGoods);
  let leftGoods = known(goodsOut.reduce((sum, goods, place) => sum + (byOutcome(place) ? 0 : goods), 0), 'goods');
  let leftBads = known(counts.excluded.reduce((sum, { bads }, place) => sum + (byOutcome(place) ? 0 : bads), 0), 'bads');
  let left = prepared.rows;
  const waterfall: WaterfallStep[] = [
    { kind: 'source', label: 'Rows of the file', out: 0, outGoods: 0, outBads: 0, left, leftGoods, leftBads },
  ];
  const step = (
    kind: WaterfallStep['kind'],
    label: string,
    out: number,
    outGoods: number | null,
    outBads: number | null,
  ): void => {
    left -= out;
    leftGoods -= outGoods ?? 0;
    leftBads -= outBads ?? 0;
    waterfall.push({ kind, label, out, outGoods, outBads, left, leftGoods, leftBads });
  };
  counts.excluded.forEach(({ reason, rows, bads }, place) => {
    if (byOutcome(place)) step('outcome', 'Excluded by outcome', rows, 0, 0);
    else step('exclusion', reason, rows, goodsOut[place], bads);
  });
  if (content.declined) step('declined', 'Declined: outcome not known', counts.declined, null, null);
  step('out-of-time', 'Out-of-time', counts.outOfTime.rows, counts.outOfTime.goods, counts.outOfTime.bads);
  step('hold-out', 'Hold-out', counts.holdOut.rows, counts.holdOut.goods, counts.holdOut.bads);
  step('development', 'Development', 0, 0, 0);
  const { development } = counts;
  if (left !== development.rows || leftGoods !== development.goods || leftBads !== development.bads)
    throw new Error(`The waterfall leaves ${left} rows (${leftGoods} good, ${leftBads} bad), and development has ${development.rows} (${development.goods}, ${development.bads})`);

  const rated = ({ goods, bads }: { goods: number; bads: number }) => ({ goods, bads, badRate: badRate(goods, bads) });
  const told = (part: ResultCounts['development'], code: number) => ({
    ...part,
    badRate: badRate(part.goods, part.bads),
    ...(prepared.weights && { weightedBadRate: weightedBadRate(prepared, prepared.weights, code) }),
  });
  return {
    waterfall,
    partitions: {
      development: told(counts.development, DEVELOPMENT),
      holdOut: told(counts.holdOut, HOLD_OUT),
      outOfTime: { covered: false, ...told(counts.outOfTime, OUT_OF_TIME) },
    },
    declined: counts.declined,
    byRule: countRule(content, prepared, reader),
    sensitivity: cases.map((entry) => ({ ...entry, development: rated(entry.development), holdOut: rated(entry.holdOut) })),
  };
}

/** Where bads were sampled more often than goods, only this is the bad rate of those who applied. */
function weightedBadRate({ partition, outcome }: Prepared, weights: Float64Array, code: number): number | null {
  let [goods, bads] = [0, 0];
  for (let row = 0; row < outcome.length; row++) {
    if (partition[row] !== code) continue;
    if (outcome[row] === GOOD) goods += weights[row];
    else if (outcome[row] === BAD) bads += weights[row];
  }
  return badRate(goods, bads);
}

/** What each part of an outcome by rule takes; null where the outcome is by values. */
function countRule(content: SampleDefinitionContent, { counts, exclusion, outcome }: Prepared, reader: OutcomeReader): RuleCounts | null {
  if (!isByRule(content.outcome)) return null;
  let [tooFewMonths, missing] = [0, 0];
  for (let row = 0; row < outcome.length; row++) {
    if (exclusion[row] !== content.exclusions.length + 1) continue;
    if (reader.says(row) === TOO_FEW_MONTHS) tooFewMonths++;
    else missing++;
  }
  const of = (what: 'goods' | 'bads' | 'indeterminates'): number => counts.development[what] + counts.holdOut[what];
  const [goods, bads] = [of('goods'), of('bads')];
  return { tooFewMonths, missing, bads, indeterminates: of('indeterminates'), goods, badRate: badRate(goods, bads) };
}
