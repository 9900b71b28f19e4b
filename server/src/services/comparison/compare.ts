import type { ComparedCharacteristic, ComparedFit, Comparison, PairedTest } from '@tallystone/contracts/comparison/schema';
import { problemCodes } from '@tallystone/contracts/problems/codes';
import type { ColumnRole } from '@tallystone/contracts/samples/columns';
import type { PartitionName } from '@tallystone/contracts/result/types';
import type { Specification } from '@tallystone/contracts/specification/types';
import { scaleToPoints } from '@tallystone/numeric';
import canonicalize from 'canonicalize';
import { Op, type Sequelize } from 'sequelize';
import { Fit, FittedPath, type StoredPath } from '../../models/fit';
import type { SourceColumn } from '../../replay/source';
import { openSample } from '../../storage/columnStore';
import { Problem, notFound } from '../../problems/problem';
import type { ComparedFitFigures } from '../../threads/compare-fits';
import type { OtherColumns } from '../../threads/compare-others';
import { runInThread } from '../../threads/run-in-thread';
import { type FoundFit, findFits } from '../fits/find-fit';
import { outOfTimeState } from '../out-of-time/cover';
import { findDefinition } from '../samples/definitions';
import { loadColumns } from '../samples/load-columns';
import { differingSettings } from './settings';

/** A fit with what it is compared at. */
interface Side {
  readonly fit: FoundFit;
  readonly specification: Specification;
  readonly path: StoredPath;
  readonly index: number;
}

/**
 * Fits side by side at the penalty chosen for each (by the one-standard-error rule where nothing is chosen yet). Out-of-time joins in only where
 * every sample definition concerned has been opened.
 *
 * @throws Problem 404 for a fit that is not of this model, 422 for one that has no path
 */
export async function compare(sequelize: Sequelize, modelId: string, ids: readonly string[]): Promise<Comparison> {
  const all = new Map((await findFits(sequelize, modelId)).map((fit) => [fit.id, fit]));
  const fits = withAcceptsOnly(ids, all).map((id) => all.get(id));
  if (!fits.every((fit) => fit !== undefined)) throw notFound();
  const waiting = fits.filter((fit) => fit.state !== 'ready');
  if (waiting.length > 0) {
    throw new Problem(422, problemCodes.invalid, 'Only fits that have run to their end can be compared.', {
      problems: waiting.map((fit) => ({ code: problemCodes.invalid, message: `“${fit.name}” is ${fit.state}.`, where: { fit: fit.id } })),
    });
  }
  const sides = await sidesOf(fits);
  const states = await Promise.all(fits.map((fit) => outOfTimeState(sequelize, fit.definitionId)));
  const state = states.every((one) => one === 'none') ? 'none' : states.every((one) => one === 'opened') ? 'opened' : 'covered';
  const partitions: PartitionName[] = state === 'opened' ? ['development', 'holdOut', 'outOfTime'] : ['development', 'holdOut'];
  const others = await otherColumns(sequelize, fits[0]);
  const figures = await runInThread('fit.compare', { fits: await Promise.all(sides.map((side) => toScore(sequelize, side))), partitions, others });
  const note = figures.sameRows ? null : 'The fits do not see the same rows in the same partitions: figures stand side by side, but no difference is tested.';
  return {
    fits: sides.map((side, place) => presentSide(side, figures.fits[place])),
    sameRows: figures.sameRows,
    rowsNote: note,
    outOfTimeState: state,
    settings: differingSettings(sides.map(({ specification }) => specification)),
    characteristics: comparedCharacteristics(sides),
    tests: testsOf(sides, figures.fits),
    incumbents: figures.incumbents.map(({ column, figures: by }) => {
      const named = (one: (typeof by)[PartitionName]) => one && { ...one, tests: one.tests.map((test, place) => ({ fitId: sides[place].fit.id, ...test })) };
      return { column, development: named(by.development), holdOut: named(by.holdOut), outOfTime: named(by.outOfTime) };
    }),
    segments: [...figures.segments],
  };
}

/** A fit with inference is never shown without the fit on accepted applicants alone. */
function withAcceptsOnly(ids: readonly string[], all: ReadonlyMap<string, FoundFit>): string[] {
  const beside = ids.map((id) => all.get(id)?.acceptsOnlyId ?? null);
  return [...new Set([...ids, ...beside.filter((id) => id !== null)])];
}

async function sidesOf(fits: readonly FoundFit[]): Promise<Side[]> {
  const ids = fits.map((fit) => fit.id);
  const [specifications, paths] = await Promise.all([
    Fit.findAll({ where: { id: { [Op.in]: ids } }, attributes: ['id', 'specification'], raw: true }),
    FittedPath.findAll({ where: { fitId: { [Op.in]: ids } }, attributes: ['fitId', 'path'], raw: true }),
  ]);
  return fits.map((fit) => {
    const text = specifications.find((row) => row.id === fit.id)?.specification;
    const path = paths.find((row) => row.fitId === fit.id)?.path;
    if (text === undefined || path === undefined) throw new Error(`Fit ${fit.id} is ready without a path`);
    return { fit, specification: JSON.parse(text) as Specification, path, index: fit.choice?.place ?? path.crossValidation.oneStandardError };
  });
}

async function toScore(sequelize: Sequelize, { fit, specification, path, index }: Side) {
  const definition = await findDefinition(sequelize, fit.definitionId);
  if (!definition) throw new Error(`Fit ${fit.id} has no sample definition`);
  const { rows, columns } = await loadColumns(sequelize, definition.sampleId, specification);
  return {
    specification,
    rows,
    columns,
    intercept: path.intercepts[index],
    coefficients: path.coefficients[index],
    woe: path.characteristics.map(({ bins }) => bins.map((bin) => bin.woe)),
  };
}

/** The incumbent scores and segments of the sample of one fit. */
async function otherColumns(sequelize: Sequelize, fit: FoundFit): Promise<OtherColumns> {
  const definition = await findDefinition(sequelize, fit.definitionId);
  if (!definition) throw new Error(`Fit ${fit.id} has no sample definition`);
  const { content, rows, sampleId } = definition;
  const named = (role: ColumnRole): string[] => content.columns.filter((column) => column.role === role).map(({ column }) => column);
  const [incumbents, segments] = [named('incumbent score'), named('segment')];
  const source = await openSample(sequelize, sampleId, [...incumbents, ...segments]);
  const of = (names: readonly string[]): Map<string, SourceColumn> =>
    new Map(names.flatMap((name) => {
      const column = source.column(name);
      return column ? [[name, column] as const] : [];
    }));
  return { data: content.data, rows, incumbents: of(incumbents), segments: of(segments) };
}

function presentSide({ fit, path, index }: Side, { metrics }: ComparedFitFigures): ComparedFit {
  return {
    id: fit.id,
    number: fit.number,
    name: fit.name,
    index,
    lambda: path.lambdas[index],
    mixing: fit.settings.mixing,
    chosenBy: fit.choice?.rule ?? 'not chosen',
    kept: path.kept[index],
    inference: fit.settings.declined.method,
    ...metrics,
  };
}

/** Characteristics of all fits in the order of the first that has them. */
export function comparedCharacteristics(sides: readonly Pick<Side, 'specification' | 'path' | 'index'>[]): ComparedCharacteristic[] {
  const columns = [...new Set(sides.flatMap(({ path }) => path.characteristics.map(({ column }) => column)))];
  const ranges = sides.map(pointsRanges);
  return columns.map((column) => {
    const places = sides.map(({ path }) => path.characteristics.findIndex((entry) => entry.column === column));
    const coefficients = sides.map(({ path, index }, k) => (places[k] < 0 ? null : path.coefficients[index][places[k]]));
    const signs = new Set(coefficients.filter((value) => value !== null && value !== 0).map((value) => Math.sign(value as number)));
    const bins = sides
      .filter((_, k) => places[k] >= 0)
      .map(({ specification }) => specification.characteristics.find((entry) => entry.column === column))
      .map((entry) => canonicalize(binsOnly(entry)));
    const label = sides.flatMap(({ path }, k) => (places[k] < 0 ? [] : [path.characteristics[places[k]].label]))[0];
    return {
      column,
      label,
      coefficients,
      pointsRange: ranges.map((range) => range.get(column) ?? null),
      signFlip: signs.size > 1,
      binsDiffer: new Set(bins).size > 1,
    };
  });
}

/** What makes the bins of a characteristic, without how it enters the fit. */
function binsOnly(entry: Specification['characteristics'][number] | undefined): unknown {
  if (!entry || entry.coding === 'linear') return null;
  return entry.kind === 'numeric'
    ? { edges: entry.edges, closed: entry.closed, special: entry.special, missing: entry.missing }
    : { groups: entry.groups, special: entry.special, missing: entry.missing, unseen: entry.unseen };
}

function pointsRanges({ path, index }: Pick<Side, 'path' | 'index'>): Map<string, number> {
  const kept = path.characteristics.map((entry, j) => ({ ...entry, coefficient: path.coefficients[index][j] })).filter(({ coefficient }) => coefficient !== 0);
  const { pointsRounded } = scaleToPoints(path.scaling, {
    intercept: path.intercepts[index],
    terms: kept.map(({ coefficient, bins }) => ({ coefficient, woe: bins.map((bin) => bin.woe) })),
  });
  return new Map(kept.map(({ column }, k) => [column, Math.max(...pointsRounded[k]) - Math.min(...pointsRounded[k])]));
}

function testsOf(sides: readonly Side[], figures: readonly ComparedFitFigures[]): PairedTest[] {
  return figures.flatMap(({ paired }, place) =>
    paired === null
      ? []
      : (['development', 'holdOut', 'outOfTime'] as const).flatMap((partition) => {
          const test = paired[partition];
          return test === null ? [] : [{ partition, fitId: sides[place].fit.id, ...test }];
        }),
  );
}
