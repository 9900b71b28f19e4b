import type { PartitionName } from '@tallystone/contracts/result/types';
import type { Specification } from '@tallystone/contracts/specification/types';
import type { DocumentInput } from '../input';
import { area, fixed, intervalText, significant } from '../number-texts';

export const partitions: readonly PartitionName[] = ['development', 'holdOut', 'outOfTime'];
export const partitionLabel: Record<PartitionName, string> = {
  development: 'Development',
  holdOut: 'Hold-out',
  outOfTime: 'Out-of-time',
};

const z = 1.959963984540054;

/** AUC with DeLong's symmetric 95 % interval. */
export function aucWithInterval(auc: number, standardError: number | null): { value: string; interval: string } {
  return {
    value: area(auc),
    interval: standardError === null ? '–' : intervalText(auc - z * standardError, auc + z * standardError, 3),
  };
}

/** Out-of-time figures stay covered until somebody opens them. */
export function isCovered(input: DocumentInput, partition: PartitionName): boolean {
  return partition === 'outOfTime' && input.outOfTime.covered;
}

/** A cell of a table by partition: the figure, "covered", or a dash where there are no rows. */
export function byPartition<Entry>(
  input: DocumentInput,
  entries: Record<PartitionName, Entry | null>,
  text: (entry: Entry) => string,
): string[] {
  return partitions.map((partition) => {
    if (isCovered(input, partition)) return 'covered';
    const entry = entries[partition];
    return entry === null ? '–' : text(entry);
  });
}

export function penaltyName(mixing: number): string {
  if (mixing === 1) return 'L1 (lasso)';
  if (mixing === 0) return 'L2 (ridge)';
  return `elastic net, mixing ${significant(mixing)}`;
}

export const ruleName = {
  value: 'stated value',
  minimum: 'minimum-deviance rule',
  'one-standard-error': 'one-standard-error rule',
} as const;

/** Which rows of declined applications entered, and how. */
export function inferenceText(declined: Specification['declined']): string {
  if (declined === null || declined.method === 'none') return 'none: accepted applications only';
  if (declined.method === 'reweighting') return 're-weighting: accepted applications weigh 1 / P(accept)';
  if (declined.method === 'fuzzy') return 'fuzzy: each as a good and as a bad, by the estimated PD';
  return `parcelling: ${declined.bands} score bands, bad rate times ${declined.uplift}`;
}

export const classingName = {
  once: 'classed once, on all development rows (cross-validation is then optimistic)',
  woe: 'WOE calculated again from each training part',
  cuts: 'cuts and WOE made again from each training part',
} as const;

export const judgementCaution =
  'Scores, reason codes and cut-offs are aids to judgement. The law that applies to the lender governs: the jurisdiction’s rules on credit, equal treatment, data protection and automated decisions. Qualified legal, compliance and validation staff decide.';

export const headOfRecord = (input: DocumentInput): string => `${input.recordHead.sequence} · ${input.recordHead.hash}`;

export function bandText(from: number | null, to: number | null): string {
  if (from === null && to === null) return 'all';
  if (from === null) return `under ${fixed(to, 1)}`;
  if (to === null) return `${fixed(from, 1)} and over`;
  return `${fixed(from, 1)} to under ${fixed(to, 1)}`;
}

export function stabilityReading(value: number | null): string {
  if (value === null) return '–';
  return value < 0.1 ? 'small' : value < 0.25 ? 'moderate' : 'large';
}
