import { gather, gatherNumbers } from './gather';
import { BAD, DECLINED, DEVELOPMENT, GOOD, type Prepared } from './types';

/** The rows that a WOE table and a fit are made of: known outcomes of development first, then inferred copies of declined rows. */
export interface FitRows {
  /** Row of the file for each entry; a declined row comes twice, once as good, once as bad. */
  rows: Uint32Array;
  /** 1 good, 0 bad. */
  outcome: Uint8Array;
  /** Null = all 1. */
  weights: Float64Array | null;
  /** 1 to K for known outcomes, 0 for inferred ones. Null without folds. */
  folds: Uint8Array | null;
  /** Entries from here on are inferred. */
  known: number;
}

/** Goods and bads of the partitions that `takes` accepts. */
export function knownRows(prepared: Prepared, takes: (partition: number) => boolean): Uint32Array {
  const { outcome, partition } = prepared;
  const chosen = new Uint32Array(outcome.length);
  let count = 0;
  for (let row = 0; row < outcome.length; row++) {
    if ((outcome[row] === GOOD || outcome[row] === BAD) && takes(partition[row])) chosen[count++] = row;
  }
  return chosen.slice(0, count);
}

export function declinedRows(prepared: Prepared, takes: (partition: number) => boolean): Uint32Array {
  const { outcome, partition } = prepared;
  const chosen: number[] = [];
  for (let row = 0; row < outcome.length; row++) if (outcome[row] === DECLINED && takes(partition[row])) chosen.push(row);
  return Uint32Array.from(chosen);
}

export const inDevelopment = (partition: number): boolean => partition === DEVELOPMENT;

/** Fit rows of known outcomes alone. */
export function fitRowsOf(prepared: Prepared, takes: (partition: number) => boolean = inDevelopment): FitRows {
  const rows = knownRows(prepared, takes);
  return {
    rows,
    outcome: gather(prepared.outcome, rows),
    weights: prepared.weights === null ? null : gatherNumbers(prepared.weights, rows),
    folds: prepared.folds === null ? null : gather(prepared.folds, rows),
    known: rows.length,
  };
}

/** Weighted bad rate. */
export function badRate(fitRows: FitRows): number {
  let total = 0;
  let bads = 0;
  for (let index = 0; index < fitRows.rows.length; index++) {
    const weight = fitRows.weights === null ? 1 : fitRows.weights[index];
    total += weight;
    if (fitRows.outcome[index] === BAD) bads += weight;
  }
  return bads / total;
}
