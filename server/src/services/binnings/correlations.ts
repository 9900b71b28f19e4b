import type { CorrelationStanding, Correlations } from '@tallystone/contracts/binnings/correlations';
import type { BinnedCharacteristic } from '@tallystone/contracts/specification/types';
import { clustersAt, hierarchy, nearlyTheSame } from '@tallystone/numeric/diagnostics/clusters';
import type { Sequelize, Transaction } from 'sequelize';
import { binsOfEntry } from '../../classing/definition';
import { rows } from '../../database/sql';
import type { Actor } from '../../models/person';
import { canEditBinning } from '../../policies/binnings';
import { runInThread } from '../../threads/run-in-thread';
import { sameBins } from './check-bins';
import type { CorrelatedBins } from './correlate-binning';
import type { FoundBinning } from './find-binning';

interface Stored {
  readonly characteristics: readonly CorrelatedBins[];
  readonly matrix: readonly (readonly (number | null)[])[];
  readonly rows: number;
  readonly madeAt: Date;
}

async function stored(sequelize: Sequelize, binningId: string, tx: Transaction | null): Promise<Stored | null> {
  const [found] = await rows<Stored>(
    sequelize,
    'SELECT characteristics, matrix, rows, made_at AS "madeAt" FROM binning_correlations WHERE binning_id = $1',
    [binningId],
    tx,
  );
  return found ?? null;
}

/** A characteristic that is included now. */
interface Included {
  readonly id: string;
  readonly column: string;
  readonly definition: BinnedCharacteristic;
  readonly informationValue: number;
  /** Bins with a code of their own. */
  readonly bins: number;
}

function includedNow(sequelize: Sequelize, binningId: string, tx: Transaction | null): Promise<Included[]> {
  return rows<Included>(
    sequelize,
    `SELECT id, column_name AS "column", definition, (summary ->> 'informationValue')::float8 AS "informationValue",
            (summary ->> 'bins')::int AS bins
       FROM binning_characteristics WHERE binning_id = $1 AND included ORDER BY position`,
    [binningId],
    tx,
  );
}

/** Whether what was calculated last still speaks of these, and the run that calculates it now. */
async function standingOf(
  sequelize: Sequelize,
  binningId: string,
  found: Stored | null,
  included: readonly Included[],
  tx: Transaction | null,
): Promise<CorrelationStanding> {
  const [run] = await rows<{ id: string }>(
    sequelize,
    `SELECT id FROM runs WHERE kind = 'binning.correlate' AND singleton = $1 AND state IN ('queued', 'running', 'cancelling')`,
    [binningId],
    tx,
  );
  const then = new Map((found?.characteristics ?? []).map(({ id, bins }) => [id, bins]));
  const changed = included.filter(({ id, definition, bins }) => {
    const before = then.get(id);
    // One bin has no variance: it was not there, and would not be there if they were calculated now.
    return before ? !sameBins(before, binsOfEntry(definition)) : bins > 1;
  });
  return {
    calculatedAt: found?.madeAt.toISOString() ?? null,
    changed: changed.map(({ column }) => column),
    runId: run?.id ?? null,
  };
}

/**
 * Number of the group of each of these that correlates by 0.7 or more with every other of its group; those alone are not in it. Groups are
 * numbered in the order of their first column.
 */
function groupsAmong({ characteristics, matrix: whole }: Stored, included: ReadonlySet<string>): ReadonlyMap<string, number> {
  const places = characteristics.flatMap(({ id }, place) => (included.has(id) ? [place] : []));
  const matrix = places.flatMap((j) => places.map((k) => whole[j][k] ?? NaN));
  const clusters = clustersAt(hierarchy(matrix, places.length), places.length, nearlyTheSame).filter(({ length }) => length > 1);
  return new Map(clusters.flatMap((cluster, group) => cluster.map((j) => [characteristics[places[j]].id, group + 1] as const)));
}

/** Groups of the characteristics that are included, by their ids, and whether they still speak of their bins. */
export async function groupsWithStanding(
  sequelize: Sequelize,
  binningId: string,
  tx: Transaction | null = null,
): Promise<{ groups: ReadonlyMap<string, number>; standing: CorrelationStanding }> {
  const found = await stored(sequelize, binningId, tx);
  const included = await includedNow(sequelize, binningId, tx);
  return {
    groups: found ? groupsAmong(found, new Set(included.map(({ id }) => id))) : new Map(),
    standing: await standingOf(sequelize, binningId, found, included, tx),
  };
}

/** The group of one characteristic among those that are included; null alone, left out, or before correlations are calculated. */
export async function groupOf(
  sequelize: Sequelize,
  { binningId, characteristicId }: { binningId: string; characteristicId: string },
  tx: Transaction | null = null,
): Promise<number | null> {
  const found = await stored(sequelize, binningId, tx);
  if (!found) return null;
  const included = await rows<{ id: string }>(
    sequelize,
    'SELECT id FROM binning_characteristics WHERE binning_id = $1 AND included',
    [binningId],
    tx,
  );
  return groupsAmong(found, new Set(included.map(({ id }) => id))).get(characteristicId) ?? null;
}

/** What was calculated last, for the characteristics that are included now, and which of them it no longer speaks of. */
export async function presentCorrelations(sequelize: Sequelize, person: Actor, binning: FoundBinning): Promise<Correlations> {
  const found = await stored(sequelize, binning.id, null);
  const included = await includedNow(sequelize, binning.id, null);
  const places = new Map((found?.characteristics ?? []).map(({ id }, place) => [id, place]));
  const there = included.flatMap((one) => {
    const place = places.get(one.id);
    return place === undefined ? [] : [{ ...one, place }];
  });
  const matrix = there.map(({ place: j }) => there.map(({ place: k }) => found?.matrix[j][k] ?? null));
  const inflation = there.length > 0 ? await runInThread('binning.inflate', { matrix }) : new Float64Array(0);
  return {
    ...(await standingOf(sequelize, binning.id, found, included, null)),
    rows: found?.rows ?? 0,
    characteristics: there.map(({ id, column, informationValue }, index) => ({
      id,
      column,
      informationValue,
      inflation: Number.isFinite(inflation[index]) ? inflation[index] : null,
      collinear: inflation[index] === Infinity,
    })),
    matrix,
    abilities: canEditBinning(person, binning).allowed ? ['calculate'] : [],
  };
}
