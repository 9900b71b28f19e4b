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

const partitions: readonly PartitionName[] = ['development', 'holdOut', 'outOfTime'];

/** What always stands beside a fit when it is frozen: the fit on accepted applicants alone, and the incumbent scores of its sample. Covered figures take no part. */
export async function comparedWith(sequelize: Sequelize, fit: FoundFit, { columns }: Pick<SampleDefinitionContent, 'columns'>): Promise<ComparedWith[]> {
  // Nothing stands beside most fits: then nothing is scored again.
  if (fit.acceptsOnlyId === null && !columns.some(({ role }) => role === 'incumbent score')) return [];
  const comparison = await compare(sequelize, fit.modelId, [fit.id]);
  const minus = (value: number | null): number | null => (value === null ? null : -value);
  const beside = comparison.fits.slice(1).flatMap((other) =>
    partitions.flatMap((partition) => {
      const test = comparison.tests.find((entry) => entry.fitId === other.id && entry.partition === partition);
      const at = other[partition];
      if (!test || !at) return [];
      // There the other fit is held against this one.
      const { difference, lower, upper, pValue } = test;
      return [{ against: `${other.name} (accepts only)`, partition, auc: at.auc, difference: -difference, lower: minus(upper), upper: minus(lower), pValue }];
    }),
  );
  const incumbents = comparison.incumbents.flatMap((incumbent) =>
    partitions.flatMap((partition) => {
      const at = incumbent[partition];
      const test = at?.tests.find(({ fitId }) => fitId === fit.id);
      if (!at || !test) return [];
      const { fitId: _fit, ...figures } = test;
      return [{ against: `Incumbent, ${incumbent.column}`, partition, auc: at.auc, ...figures }];
    }),
  );
  return [...beside, ...incumbents];
}
