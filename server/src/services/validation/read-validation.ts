import type { Replication, Stability, ValidationWork } from '@tallystone/contracts/validation/schema';
import type { PartitionName, Result } from '@tallystone/contracts/result/types';
import type { Sequelize } from 'sequelize';
import { rows } from '../../database/sql';
import type { Actor } from '../../models/person';
import { VersionRow } from '../../models/version';
import { canReplicate } from '../../policies/versions';
import { outOfTimeState } from '../out-of-time/cover';
import { readEvidence } from '../versions/evidence';
import type { FoundVersion } from '../versions/find-version';
import { performanceOf } from './halves';
import type { ReplicationEvidence } from './replicate';
import type { StabilityEvidence } from './stability';

const pathOfOutOfTime = /outOfTime/;

/** Replications, stability studies and performance of a version. Out-of-time figures only once opened. */
export async function readValidation(sequelize: Sequelize, version: FoundVersion, person: Actor): Promise<ValidationWork> {
  const [evidence, row, state, runs] = await Promise.all([
    readEvidence(sequelize, version.id, ['replication', 'stability']),
    VersionRow.findByPk(version.id, { attributes: ['result'], raw: true }),
    outOfTimeState(sequelize, version.definitionId),
    rows<{ id: string }>(
      sequelize,
      `SELECT id FROM runs WHERE entity = 'version' AND entity_id = $1 AND kind IN ('version.replicate', 'version.stability') AND ended_at IS NULL`,
      [version.id],
    ),
  ]);
  if (!row) throw new Error(`There is no version ${version.id}`);
  const partitions: PartitionName[] = state === 'covered' ? ['development', 'holdOut'] : ['development', 'holdOut', 'outOfTime'];
  const replications = evidence
    .filter(({ kind }) => kind === 'replication')
    .map((entry): Replication => {
      const { solver: _s, largestCoefficientDifference: _c, largestPointsDifference: _p, resultSha256: _r, intercept: _i, coefficients: _k, ...content } =
        entry.content as ReplicationEvidence;
      return {
        ...content,
        challenge: content.challenge ? (content.challenge as Replication['challenge']) : null,
        evidenceId: entry.id,
        evidenceNumber: entry.number,
        rows: content.rows.filter(({ place }) => state !== 'covered' || !pathOfOutOfTime.test(place)),
        performance: content.performance.filter(({ partition }) => partitions.includes(partition)),
        by: entry.by,
        at: entry.at,
      };
    });
  const stability = evidence
    .filter(({ kind }) => kind === 'stability')
    .map((entry): Stability => {
      const { level: _level, ...content } = entry.content as StabilityEvidence;
      return { ...content, rows: [...content.rows], evidenceId: entry.id, evidenceNumber: entry.number, by: entry.by, at: entry.at };
    });
  return {
    replications: replications.reverse(),
    stability: stability.reverse(),
    runIds: runs.map(({ id }) => id),
    performance: performanceOf(JSON.parse(row.result) as Result, partitions),
    abilities: canReplicate(person, version).allowed ? ['replicate', 'study-stability'] : [],
  };
}
