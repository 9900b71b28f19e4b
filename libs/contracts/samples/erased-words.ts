import type { Erasure } from './erasure';

const day = (at: string): string => at.slice(0, 10);
const sentence = (text: string): string => (/[.!?…]$/.test(text) ? text : `${text}.`);

function happened({ sample, fileName, at, by, reason }: Erasure): string {
  return `the rows of sample ${sample}, ${fileName}, were erased on ${day(at)} by ${by}. Reason: ${sentence(reason.trim())}`;
}

/**
 * What is said wherever rows are asked for that are gone: what, since when, by whom, why, and what next. The one wording of server and client.
 *
 * @example erasedWords(sample.erased) // 'The rows of sample 1, applicants.csv, were erased on 2026-12-02 by Ada. Reason: …'
 */
export function erasedWords(erasure: Erasure): string {
  const what = happened(erasure);
  return `${what[0].toUpperCase()}${what.slice(1)} What was counted stays; what needs rows needs a file brought in as a new sample.`;
}

/** What a version says whose rows are gone. */
export const noLongerReplicable = (erasure: Erasure): string => `No longer replicable: ${happened(erasure)}`;
