import type { ComparedFit, ComparedSegment, Comparison } from '@tallystone/contracts/comparison/schema';
import type { SampleDefinitionContent } from '@tallystone/contracts/samples/definition';
import type { PartitionName } from '@tallystone/contracts/result/types';
import type { Sequelize } from 'sequelize';
import { compare } from '../comparison/compare';
import type { FoundFit } from '../fits/find-fit';

/** AUC of a fit against another on the same rows; the difference is the fit's less the other's. */
export interface ComparedWith {
  readonly against: string;
  readonly partition: PartitionName;
  readonly auc: number;
  readonly difference: number;
  readonly lower: number | null;
  readonly upper: number | null;
  readonly pValue: number | null;
}

/** The fit on accepted applicants alone, beside a fit with inference: both at their penalties, on known outcomes. */
export interface AcceptsOnly extends Pick<ComparedFit, 'name' | 'number' | 'chosenBy' | 'lambda' | 'kept' | 'development' | 'holdOut' | 'outOfTime'> {
  /** `own` of the fit with inference, `beside` of the other; null where it takes no part, 0 where it is not kept. */
  readonly coefficients: readonly { column: string; own: number | null; beside: number | null }[];
}

/** What stands beside a version. */
export interface Beside {
  readonly comparisons: readonly ComparedWith[];
  readonly acceptsOnly: AcceptsOnly | null;
  /** Of this fit alone on the hold-out, without protected columns; empty where no column has the role of a segment. */
  readonly segments: readonly (Omit<ComparedSegment, 'auc'> & { auc: number | null })[];
}

const partitions: readonly PartitionName[] = ['development', 'holdOut', 'outOfTime'];

/**
 * What always stands beside a fit when it is frozen: the fit on accepted applicants alone, the incumbent scores of its sample, and its own figures by
 * segment. Covered figures take no part.
 */
export async function comparedWith(sequelize: Sequelize, fit: FoundFit, { columns }: Pick<SampleDefinitionContent, 'columns'>): Promise<Beside> {
  // Nothing stands beside most fits: then nothing is scored again.
  if (fit.acceptsOnlyId === null && !columns.some(({ role }) => role === 'incumbent score' || role === 'segment'))
    return { comparisons: [], acceptsOnly: null, segments: [] };
  const comparison = await compare(sequelize, fit.modelId, [fit.id]);
  const barred = new Set(columns.filter((column) => column.protected).map(({ column }) => column));
  return {
    comparisons: [...besideAcceptsOnly(comparison), ...besideIncumbents(comparison, fit.id)],
    acceptsOnly: acceptsOnlyOf(comparison),
    segments: comparison.segments.filter(({ column }) => !barred.has(column)).map(({ auc, ...segment }) => ({ ...segment, auc: auc[0] })),
  };
}

const minus = (value: number | null): number | null => (value === null ? null : -value);

function besideAcceptsOnly(comparison: Comparison): ComparedWith[] {
  return comparison.fits.slice(1).flatMap((other) =>
    partitions.flatMap((partition) => {
      const test = comparison.tests.find((entry) => entry.fitId === other.id && entry.partition === partition);
      const at = other[partition];
      if (!test || !at) return [];
      // There the other fit is held against this one.
      const { difference, lower, upper, pValue } = test;
      return [{ against: `${other.name} (accepts only)`, partition, auc: at.auc, difference: -difference, lower: minus(upper), upper: minus(lower), pValue }];
    }),
  );
}

function besideIncumbents(comparison: Comparison, fitId: string): ComparedWith[] {
  return comparison.incumbents.flatMap((incumbent) =>
    partitions.flatMap((partition) => {
      const at = incumbent[partition];
      const test = at?.tests.find((entry) => entry.fitId === fitId);
      if (!at || !test) return [];
      const { fitId: _fit, ...figures } = test;
      return [{ against: `Incumbent, ${incumbent.column}`, partition, auc: at.auc, ...figures }];
    }),
  );
}

function acceptsOnlyOf({ fits, characteristics }: Comparison): AcceptsOnly | null {
  const other = fits.at(1);
  if (!other) return null;
  const { name, number, chosenBy, lambda, kept, development, holdOut, outOfTime } = other;
  const coefficients = characteristics.map(({ column, coefficients: [own, beside] }) => ({ column, own, beside }));
  return { name, number, chosenBy, lambda, kept, development, holdOut, outOfTime, coefficients };
}
