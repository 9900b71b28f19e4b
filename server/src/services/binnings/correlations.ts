import type { Correlations } from '@tallystone/contracts/binnings/correlations';
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

/**
 * Number of the group of each included characteristic that correlates by 0.7 or more with every other of its group; those alone are not in it.
 * Groups are numbered in the order of their first column.
 */
export async function groupsOf(
  sequelize: Sequelize,
  binningId: string,
  tx: Transaction | null = null,
): Promise<ReadonlyMap<string, number>> {
  const found = await stored(sequelize, binningId, tx);
  if (!found) return new Map();
  const included = new Set(
    (
      await rows<{ id: string }>(
        sequelize,
        'SELECT id FROM binning_characteristics WHERE binning_id = $1 AND included',
        [binningId],
        tx,
      )
    ).map(({ id }) => id),
  );
  const places = found.characteristics.flatMap(({ id }, place) => (included.has(id) ? [place] : []));
  const matrix = places.flatMap((j) => places.map((k) => found.matrix[j][k] ?? NaN));
  const clusters = clustersAt(hierarchy(matrix, places.length), places.length, nearlyTheSame).filter(({ length }) => length > 1);
  return new Map(
    clusters.flatMap((cluster, group) => cluster.map((j) => [found.characteristics[places[j]].id, group + 1] as const)),
  );
}

/** What was calculated last, for the characteristics that are included now, and which of them it no longer speaks of. */
export async function presentCorrelations(sequelize: Sequelize, person: Actor, binning: FoundBinning): Promise<Correlations> {
  const found = await stored(sequelize, binning.id, null);
  const [run] = await rows<{ id: string }>(
    sequelize,
    `SELECT id FROM runs WHERE kind = 'binning.correlate' AND singleton = $1 AND state IN ('queued', 'running', 'cancelling')`,
    [binning.id],
  );
  const included = await rows<{ id: string; column: string; definition: BinnedCharacteristic; informationValue: number }>(
    sequelize,
    `SELECT id, column_name AS "column", definition, (summary ->> 'informationValue')::float8 AS "informationValue"
       FROM binning_characteristics WHERE binning_id = $1 AND included ORDER BY position`,
    [binning.id],
  );
  const places = new Map((found?.characteristics ?? []).map(({ id, bins }, place) => [id, { place, bins }]));
  const changed = included.filter(({ id, definition }) => {
    const then = places.get(id);
    return !then || !sameBins(then.bins, binsOfEntry(definition));
  });
  const there = included.flatMap((one) => {
    const then = places.get(one.id);
    return then ? [{ ...one, place: then.place }] : [];
  });
  const matrix = there.map(({ place: j }) => there.map(({ place: k }) => found?.matrix[j][k] ?? null));
  const inflation = there.length > 0 ? await runInThread('binning.inflate', { matrix }) : new Float64Array(0);
  return {
    calculatedAt: found?.madeAt.toISOString() ?? null,
    rows: found?.rows ?? 0,
    characteristics: there.map(({ id, column, informationValue }, index) => ({
      id,
      column,
      informationValue,
      inflation: Number.isFinite(inflation[index]) ? inflation[index] : null,
      collinear: inflation[index] === Infinity,
    })),
    matrix,
    changed: changed.map(({ column }) => column),
    runId: run?.id ?? null,
    abilities: canEditBinning(person, binning).allowed ? ['calculate'] : [],
  };
}
