import { weightOfEvidence, ZeroCellError } from '@tallystone/numeric';
import type { WoeSettings } from '@tallystone/contracts/specification/types';
import type { FitRows } from './fit-rows';
import { refuse, type ReplayProblem } from './problems';
import { GOOD, NO_BIN, type CodedCharacteristic, type CodeMatrix } from './types';

/** Counts and weight of evidence of one characteristic on the rows of a fit. */
export interface WoeTable {
  /** Counted rows of each bin; an inferred row counts once. */
  rows: Float64Array;
  /** Weighted. */
  goods: Float64Array;
  bads: Float64Array;
  woe: Float64Array;
  informationValue: number;
}

/**
 * WOE tables of all characteristics, null for "linear".
 * @param training which entries of `fitRows` count (1 = yes); null = all. `fold` only names the fold in a problem.
 * @throws ReplayError where smoothing is "never" and a bin with rows has no good or no bad: every characteristic concerned
 */
export function woeTables(
  coded: CodeMatrix,
  fitRows: FitRows,
  settings: WoeSettings,
  training: Uint8Array | null = null,
  fold: number | null = null,
): (WoeTable | null)[] {
  const problems: ReplayProblem[] = [];
  const tables = coded.characteristics.map((characteristic) => {
    if (characteristic.codes === null) return null;
    return woeTable(
      characteristic.characteristic.column,
      characteristic.bins.map((bin) => bin.label),
      gatherCodes(characteristic, fitRows),
      fitRows,
      settings,
      training,
      fold,
      problems,
    );
  });
  refuse(problems);
  return tables;
}

export function gatherCodes(characteristic: CodedCharacteristic, fitRows: FitRows): Uint8Array {
  const codes = new Uint8Array(fitRows.rows.length);
  const from = characteristic.codes ?? new Uint8Array(0);
  for (let index = 0; index < codes.length; index++) codes[index] = from[fitRows.rows[index]];
  return codes;
}

/** The table of one characteristic; a zero cell that is not smoothed is added to `problems` and gives WOE 0. */
export function woeTable(
  column: string,
  labels: readonly string[],
  codes: Uint8Array,
  fitRows: FitRows,
  settings: WoeSettings,
  training: Uint8Array | null,
  fold: number | null,
  problems: ReplayProblem[],
): WoeTable {
  const rows = new Float64Array(labels.length);
  const goods = new Float64Array(labels.length);
  const bads = new Float64Array(labels.length);
  const { outcome, weights, known } = fitRows;
  for (let index = 0; index < codes.length; index++) {
    const bin = codes[index];
    if (bin === NO_BIN || (training !== null && training[index] === 0)) continue;
    const good = outcome[index] === GOOD;
    if (index < known || good) rows[bin]++;
    const weight = weights === null ? 1 : weights[index];
    if (good) goods[bin] += weight;
    else bads[bin] += weight;
  }
  try {
    const { woe, informationValue } = weightOfEvidence(goods, bads, { amount: settings.smoothing, when: settings.when });
    return { rows, goods, bads, woe, informationValue };
  } catch (error) {
    if (!(error instanceof ZeroCellError)) {
      // No good or no bad in any bin: every known row is in no bin at all.
      const none = !goods.some((value) => value > 0) || !bads.some((value) => value > 0);
      if (!none) throw error;
      return { rows, goods, bads, woe: new Float64Array(labels.length), informationValue: 0 };
    }
    const where = fold === null ? '' : ` in the training part of fold ${fold}`;
    problems.push({
      code: 'zero-cell',
      message: `Bin "${labels[error.bin]}" of "${column}" has rows but no ${error.side}${where}, and smoothing is "${settings.when}" by ${settings.smoothing}.`,
      where: { column, bin: labels[error.bin], ...(fold === null ? {} : { fold }) },
    });
    return { rows, goods, bads, woe: new Float64Array(labels.length), informationValue: 0 };
  }
}
