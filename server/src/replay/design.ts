import type { FitProblem, Penalty } from '@tallystone/numeric';
import type { Specification } from '@tallystone/contracts/specification/types';
import type { FitRows } from './fit-rows';
import { NO_BIN, type CodeMatrix, type Model, type Term } from './types';
import type { WoeTable } from './woe';

/** From bin codes to the columns that a solver sees, and back from coefficients to tables. */

/**
 * The terms of a design in the specification's order: one per "woe" and "linear" characteristic; one per bin for "indicator"
 * (penalised: all bins; unpenalised: the first bin with rows is the reference and has none).
 * @param wanted characteristics to take; default all
 */
export function termsOf(
  coded: CodeMatrix,
  tables: readonly (WoeTable | null)[],
  unpenalised: boolean,
  wanted?: ReadonlySet<number>,
): Term[] {
  const terms: Term[] = [];
  coded.characteristics.forEach(({ characteristic, bins }, index) => {
    if (wanted !== undefined && !wanted.has(index)) return;
    if (characteristic.coding === 'linear') terms.push({ characteristic: index, kind: 'linear' });
    else if (characteristic.coding === 'woe') terms.push({ characteristic: index, kind: 'woe' });
    else {
      const rows = tables[index]?.rows ?? new Float64Array(0);
      const reference = unpenalised || characteristic.penaltyMultiplier === 0 ? rows.findIndex((count) => count > 0) : -1;
      bins.forEach((_, bin) => {
        if (bin !== reference) terms.push({ characteristic: index, kind: 'bin', bin });
      });
    }
  });
  return terms;
}

/** True if the specification's own penalty is nought everywhere. */
export function isUnpenalised(spec: Specification): boolean {
  const { lambda } = spec.fit;
  return ('value' in lambda && lambda.value === 0) || ('grid' in lambda && lambda.grid.every((value) => value === 0));
}

/** One column per term, over the entries of `fitRows`. */
export function designColumns(
  terms: readonly Term[],
  coded: CodeMatrix,
  tables: readonly (WoeTable | null)[],
  fitRows: FitRows,
): Float64Array[] {
  return terms.map((term) => {
    const { codes, values } = coded.characteristics[term.characteristic];
    const column = new Float64Array(fitRows.rows.length);
    const { rows } = fitRows;
    if (term.kind === 'linear') {
      const from = values ?? column;
      for (let index = 0; index < column.length; index++) column[index] = from[rows[index]];
      return column;
    }
    const table = byCode(term, tables[term.characteristic]);
    const from = codes ?? new Uint8Array(0);
    for (let index = 0; index < column.length; index++) column[index] = table[from[rows[index]]];
    return column;
  });
}

/** What one term contributes per unit of coefficient, by code; NO_BIN contributes nothing. */
export function byCode(term: Term, table: WoeTable | null): Float64Array {
  const contributions = new Float64Array(256);
  if (term.kind === 'woe') contributions.set(table?.woe ?? []);
  else if (term.kind === 'bin') contributions[term.bin] = 1;
  contributions[NO_BIN] = 0;
  return contributions;
}

/** The penalty of a design, one multiplier and pair of limits per term. */
export function penaltyOf(spec: Specification, coded: CodeMatrix, terms: readonly Term[], mixing: number): Penalty {
  const settings = terms.map((term) => coded.characteristics[term.characteristic].characteristic);
  const limited = settings.some(({ lower, upper }) => lower !== null || upper !== null);
  return {
    mixing,
    standardize: spec.fit.standardize,
    multipliers: Float64Array.from(settings, (one) => one.penaltyMultiplier),
    ...(limited
      ? {
          lower: Float64Array.from(settings, ({ lower }) => lower ?? -Infinity),
          upper: Float64Array.from(settings, ({ upper }) => upper ?? Infinity),
        }
      : {}),
  };
}

export function problemOf(columns: readonly Float64Array[], fitRows: FitRows, penalty: Penalty): FitProblem {
  return { columns, outcome: fitRows.outcome, ...(fitRows.weights === null ? {} : { weights: fitRows.weights }), penalty };
}

/**
 * A model as tables: eta = intercept + sum over characteristics of table[code] (or coefficient x value), always in this order, so that
 * rows with equal bins have exactly equal scores.
 */
export interface ModelTables {
  intercept: number;
  /** Per characteristic: 256 contributions by code (null for "linear"), and the coefficient of "linear" (else 0). */
  contributions: (Float64Array | null)[];
  slopes: Float64Array;
  /** Per characteristic: any coefficient is nonzero. */
  kept: boolean[];
}

export function modelTables(
  model: Model,
  terms: readonly Term[],
  coded: CodeMatrix,
  tables: readonly (WoeTable | null)[],
): ModelTables {
  const contributions = coded.characteristics.map(({ codes }) => (codes === null ? null : new Float64Array(256)));
  const slopes = new Float64Array(coded.characteristics.length);
  const kept = coded.characteristics.map(() => false);
  terms.forEach((term, index) => {
    const coefficient = model.coefficients[index];
    if (coefficient === 0) return;
    kept[term.characteristic] = true;
    const table = contributions[term.characteristic];
    if (table === null) slopes[term.characteristic] = coefficient;
    else if (term.kind === 'bin') table[term.bin] = coefficient;
    else (tables[term.characteristic]?.woe ?? new Float64Array(0)).forEach((woe, bin) => (table[bin] = coefficient * woe));
  });
  return { intercept: model.intercept, contributions, slopes, kept };
}

/** The linear predictor ln(good:bad) of some rows. */
export function etaOf(model: ModelTables, coded: CodeMatrix, rows: Uint32Array): Float64Array {
  const eta = new Float64Array(rows.length).fill(model.intercept);
  coded.characteristics.forEach(({ codes, values }, index) => {
    if (!model.kept[index]) return;
    const table = model.contributions[index];
    if (codes !== null && table !== null) {
      for (let place = 0; place < eta.length; place++) eta[place] += table[codes[rows[place]]];
    } else if (values !== null) {
      const slope = model.slopes[index];
      for (let place = 0; place < eta.length; place++) eta[place] += slope * values[rows[place]];
    }
  });
  return eta;
}
