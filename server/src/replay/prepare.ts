import type { PartitionCounts, ResultCounts } from '@tallystone/contracts/result/types';
import type { Specification } from '@tallystone/contracts/specification/types';
import { outcomeColumns, outcomeExcludes } from '@tallystone/contracts/specification/outcome';
import { Columns } from './columns';
import { applyExclusions } from './exclusions';
import { assignFolds } from './folds';
import { assignOutcome } from './outcome';
import { assignPartition } from './partition';
import { refuse, type ReplayProblem } from './problems';
import type { ColumnSource } from './source';
import { BAD, DECLINED, DEVELOPMENT, GOOD, HOLD_OUT, INDETERMINATE, OUT, OUT_OF_TIME, type Prepared } from './types';
import { readWeights } from './weight';

/** What `prepare` reads of a specification: a draft without characteristics and fit can be counted too. */
export type SampleDefinition = Pick<Specification, 'data' | 'exclusions' | 'outcome' | 'declined' | 'weight' | 'partition'> & {
  fit?: Pick<Specification['fit'], 'folds'>;
};

export interface PrepareOptions {
  /** Count a sample that cannot be fitted too (development with one class or none). Default false: it is a problem. */
  allowUnfittable?: boolean;
}

/**
 * Carries out the first half of a specification: exclusions, outcome, out-of-time, hold-out, folds, weights.
 *
 * @returns one byte per row for partition and outcome, weights, folds and the counts of the result
 * @throws ReplayError with every problem of all steps
 * @example const prepared = prepare(specification, source); prepared.counts.development.bads
 */
export function prepare(definition: SampleDefinition, source: ColumnSource, options: PrepareOptions = {}): Prepared {
  const spec = definition as Specification;
  const columns = new Columns(source, spec.data);
  const problems: ReplayProblem[] = [];
  const exclusion = applyExclusions(spec.exclusions, columns, problems);
  const { outcome, saysBad } = assignOutcome(spec, columns, exclusion, problems);
  const weights = spec.weight === null ? null : readWeights(spec.weight.column, columns, outcome, problems);
  const partition = assignPartition(spec, columns, outcome, problems);
  const foldSettings = definition.fit?.folds ?? null;
  const folds = foldSettings === null ? null : assignFolds(foldSettings, columns, outcome, partition, weights, problems);
  refuse([...columns.problems, ...problems]);

  const counts = count(spec, exclusion, outcome, saysBad, partition, weights);
  if (options.allowUnfittable !== true) {
    const { goods, bads } = counts.development;
    if (goods === 0 || bads === 0) {
      const message = `Development has ${goods} good${goods === 1 ? '' : 's'} and ${bads} bad${bads === 1 ? '' : 's'}; a fit needs both.`;
      problems.push({ code: 'one-class', message, where: { column: outcomeColumns(spec.outcome)[0] } });
    }
    if (counts.development.weight === 0 && goods + bads > 0) {
      problems.push({
        code: 'zero-weights',
        message: 'All weights of development are zero.',
        where: { column: spec.weight?.column },
      });
    }
    refuse(problems);
  }
  return {
    rows: source.rows,
    partition,
    outcome,
    exclusion,
    weights,
    folds: folds?.folds ?? null,
    foldCount: folds?.count ?? 0,
    counts,
  };
}

function count(
  spec: Specification,
  exclusion: Uint16Array,
  outcome: Uint8Array,
  saysBad: Uint8Array,
  partition: Uint8Array,
  weights: Float64Array | null,
): ResultCounts {
  const empty = (): PartitionCounts => ({ rows: 0, goods: 0, bads: 0, indeterminates: 0, weight: 0 });
  const by = { [DEVELOPMENT]: empty(), [HOLD_OUT]: empty(), [OUT_OF_TIME]: empty() };
  const reasons = spec.exclusions.map((rule) => rule.reason);
  if (outcomeExcludes(spec.outcome)) reasons.push('excluded by outcome');
  const excluded = reasons.map((reason) => ({ reason, rows: 0, bads: 0 }));
  let declined = 0;
  for (let row = 0; row < outcome.length; row++) {
    if (exclusion[row] > 0) {
      excluded[exclusion[row] - 1].rows++;
      excluded[exclusion[row] - 1].bads += saysBad[row];
    } else if (outcome[row] === DECLINED) {
      declined++;
    } else if (partition[row] !== OUT) {
      const counted = by[partition[row] as 1 | 2 | 3];
      counted.rows++;
      if (outcome[row] === GOOD) counted.goods++;
      else if (outcome[row] === BAD) counted.bads++;
      else if (outcome[row] === INDETERMINATE) counted.indeterminates++;
      if (outcome[row] !== INDETERMINATE) counted.weight += weights === null ? 1 : weights[row];
    }
  }
  return { development: by[DEVELOPMENT], holdOut: by[HOLD_OUT], outOfTime: by[OUT_OF_TIME], excluded, declined };
}
