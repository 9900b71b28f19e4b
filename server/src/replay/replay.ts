import type { Result } from '@tallystone/contracts/result/types';
import { isByRule, outcomeColumns } from '@tallystone/contracts/specification/outcome';
import type { RowTest, Specification } from '@tallystone/contracts/specification/types';
import { codeCharacteristics } from './coding';
import { fitCoded, type FittedModel, type FitRequest, type Method } from './fit';
import { prepare } from './prepare';
import { refuse } from './problems';
import { buildResult } from './result';
import type { ColumnSource } from './source';
import type { CodeMatrix, Prepared } from './types';

export interface ReplayRequest {
  specification: Specification;
  /** SHA-256 of the specification's canonical JSON as it was given (`fingerprint`). */
  specificationSha256: string;
  /** SHA-256 of the raw file. Must be the specification's, if that states one. */
  dataSha256: string;
  source: ColumnSource;
  version: string;
  method?: Method;
  onFit?: FitRequest['onFit'];
  onFold?: FitRequest['onFold'];
  crewFor?: FitRequest['crewFor'];
}

export interface Replayed {
  result: Result;
  prepared: Prepared;
  coded: CodeMatrix;
  fitted: FittedModel;
}

/**
 * Replays a specification: exclusions, outcome, partition, folds, bins, fit, points, metrics. No server, no database, no clock.
 * @throws ReplayError with every problem of the step that failed
 * @example const { result } = replay({ specification, specificationSha256, dataSha256, source, version });
 */
export function replay(request: ReplayRequest): Replayed {
  const { specification, source, method } = request;
  const stated = specification.data.sha256;
  if (stated !== null && stated !== request.dataSha256) {
    refuse([
      {
        code: 'other-data',
        message: `The specification belongs to the file with SHA-256 ${stated}; this one has ${request.dataSha256}.`,
        where: { path: 'data.sha256' },
      },
    ]);
  }
  const prepared = prepare(specification, source);
  const coded = codeCharacteristics(specification, source, prepared);
  const { onFit, onFold, crewFor } = request;
  const fitted = fitCoded({ specification, prepared, coded, source, method, onFit, onFold, crewFor });
  const result = buildResult({ ...request, prepared, coded, fitted });
  return { result, prepared, coded, fitted };
}

/** The columns that a specification reads, and which of them are read as numbers only. */
export function columnsRead(spec: Specification): { all: string[]; numbersOnly: Set<string> } {
  const text = new Set<string>();
  const numbers = new Set<string>();
  for (const column of outcomeColumns(spec.outcome)) (isByRule(spec.outcome) ? numbers : text).add(column);
  const visit = (rule: RowTest): void => {
    if ('all' in rule) rule.all.forEach(visit);
    else if ('any' in rule) rule.any.forEach(visit);
    else text.add(rule.column);
  };
  spec.exclusions.forEach(visit);
  if (spec.declined !== null) text.add(spec.declined.column);
  if ('column' in spec.partition) text.add(spec.partition.column);
  else {
    if (spec.partition.outOfTime !== null) text.add(spec.partition.outOfTime.column);
    if (spec.partition.groups !== undefined) text.add(spec.partition.groups);
  }
  const { folds } = spec.fit;
  if (folds !== null) {
    if ('column' in folds) text.add(folds.column);
    else if (folds.groups !== null) text.add(folds.groups);
  }
  if (spec.weight !== null) numbers.add(spec.weight.column);
  for (const characteristic of spec.characteristics)
    (characteristic.kind === 'numeric' ? numbers : text).add(characteristic.column);
  return { all: [...new Set([...text, ...numbers])], numbersOnly: new Set([...numbers].filter((name) => !text.has(name))) };
}
