import { fastFit, quantileType7 } from '@tallystone/numeric';
import type { Characteristic, Specification } from '@tallystone/contracts/specification/types';
import { designColumns, etaOf, modelTables, penaltyOf, problemOf, termsOf, type ModelTables } from './design';
import { declinedRows, fitRowsOf, inDevelopment, type FitRows } from './fit-rows';
import { gatherNumbers, joined } from './gather';
import { refuse } from './problems';
import { GOOD, type CodeMatrix, type Prepared } from './types';
import { woeTables } from './woe';

/**
 * What declined applicants of development contribute to WOE and fit. Their outcome is unknown and stays so: nothing inferred here is ever
 * used for a metric, and the assumptions cannot be tested on accepted applicants (Hand and Henley 1993; Crook and Banasik 2004, both
 * from memory).
 *
 * - none: nothing.
 * - reweighting: accepted rows weigh 1/P(accept); P(accept) is a ridge fit of accepted against declined.
 * - fuzzy: a declined row comes as a good and as a bad, weighing 1 - PD and PD of a ridge fit on accepted rows.
 * - parcelling: as fuzzy, with the bad rate of its score band among accepted rows times the uplift, at most 1, in place of PD.
 *
 * Both auxiliary fits use the same characteristics, coded as WOE of known outcomes ("linear": the value), and the same solver.
 */

/** Penalty of the auxiliary fits: mixing 0, standardised. A convention of this format, not a published value. */
export const AUXILIARY_LAMBDA = 0.01;

export function withDeclined(spec: Specification, prepared: Prepared, coded: CodeMatrix): FitRows {
  const accepted = fitRowsOf(prepared);
  const method = spec.declined?.method ?? 'none';
  if (spec.declined === null || method === 'none') return accepted;
  const declined = declinedRows(prepared, inDevelopment);
  if (declined.length === 0) {
    refuse([
      {
        code: 'no-declined',
        message: `No declined row is in development, so "${method}" has nothing to infer.`,
        where: { column: spec.declined.column },
      },
    ]);
  }
  if (method === 'reweighting') return reweighted(spec, prepared, coded, accepted, declined);
  const goodBad = auxiliary(spec, coded, accepted, accepted);
  const eta = (rows: Uint32Array): Float64Array => etaOf(goodBad, coded, rows);
  const pd =
    method === 'fuzzy'
      ? eta(declined).map((value) => 1 / (1 + Math.exp(value)))
      : parcelled(spec.declined, accepted, eta(accepted.rows), eta(declined));
  return twice(prepared, accepted, declined, pd);
}

/** WOE or value, with the common penalty and no limits. */
function plainly(characteristic: Characteristic): Characteristic {
  const common = { penaltyMultiplier: 1, lower: null, upper: null };
  return characteristic.coding === 'linear' ? { ...characteristic, ...common } : { ...characteristic, ...common, coding: 'woe' };
}

/** A ridge fit on the characteristics coded by `coding` rows. */
function auxiliary(spec: Specification, coded: CodeMatrix, coding: FitRows, target: FitRows): ModelTables {
  const plain: CodeMatrix = {
    ...coded,
    characteristics: coded.characteristics.map((one) => ({ ...one, characteristic: plainly(one.characteristic) })),
  };
  const tables = woeTables(plain, coding, spec.woe);
  const terms = termsOf(plain, tables, false);
  const penalty = { ...penaltyOf(spec, plain, terms, 0), standardize: true };
  const fit = fastFit(problemOf(designColumns(terms, plain, tables, target), target, penalty), AUXILIARY_LAMBDA);
  return modelTables(fit, terms, plain, tables);
}

function reweighted(
  spec: Specification,
  prepared: Prepared,
  coded: CodeMatrix,
  accepted: FitRows,
  declined: Uint32Array,
): FitRows {
  const rows = joined(accepted.rows, declined);
  const decision: FitRows = {
    rows,
    outcome: Uint8Array.from(rows, (_, index) => (index < accepted.rows.length ? 1 : 0)),
    weights: prepared.weights === null ? null : gatherNumbers(prepared.weights, rows),
    folds: null,
    known: rows.length,
  };
  const model = auxiliary(spec, coded, accepted, decision);
  const logOdds = etaOf(model, coded, accepted.rows);
  // 1/P(accept) = 1 + e^-eta.
  const weights = logOdds.map((eta, index) => (accepted.weights === null ? 1 : accepted.weights[index]) * (1 + Math.exp(-eta)));
  return { ...accepted, weights };
}

function parcelled(
  settings: NonNullable<Specification['declined']>,
  accepted: FitRows,
  etaAccepted: Float64Array,
  etaDeclined: Float64Array,
): Float64Array {
  const edges = [
    ...new Set(
      Array.from({ length: settings.bands - 1 }, (_, index) => quantileType7(etaAccepted, (index + 1) / settings.bands)),
    ),
  ];
  const bandOf = (eta: number): number => edges.filter((edge) => eta >= edge).length;
  const bads = new Float64Array(edges.length + 1);
  const totals = new Float64Array(edges.length + 1);
  etaAccepted.forEach((eta, index) => {
    const weight = accepted.weights === null ? 1 : accepted.weights[index];
    const band = bandOf(eta);
    totals[band] += weight;
    if (accepted.outcome[index] !== GOOD) bads[band] += weight;
  });
  return etaDeclined.map((eta) => {
    const band = bandOf(eta);
    return totals[band] === 0 ? 0 : Math.min(1, (settings.uplift * bads[band]) / totals[band]);
  });
}

/** Known rows, then every declined row as a good and as a bad. */
function twice(prepared: Prepared, accepted: FitRows, declined: Uint32Array, pd: Float64Array): FitRows {
  const { known } = accepted;
  const count = known + 2 * declined.length;
  const rows = new Uint32Array(count);
  const outcome = new Uint8Array(count);
  const weights = new Float64Array(count).fill(1);
  rows.set(accepted.rows);
  outcome.set(accepted.outcome);
  if (accepted.weights !== null) weights.set(accepted.weights);
  declined.forEach((row, index) => {
    const weight = prepared.weights === null ? 1 : prepared.weights[row];
    for (const good of [1, 0]) {
      const place = known + 2 * index + (1 - good);
      rows[place] = row;
      outcome[place] = good;
      weights[place] = weight * (good === 1 ? 1 - pd[index] : pd[index]);
    }
  });
  let folds: Uint8Array | null = null;
  if (accepted.folds !== null) {
    folds = new Uint8Array(count);
    folds.set(accepted.folds);
  }
  return { rows, outcome, weights, folds, known };
}
