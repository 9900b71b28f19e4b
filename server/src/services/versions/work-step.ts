import type { Sequelize } from 'sequelize';
import { rows } from '../../database/sql';
import type { StepReport } from '../models/work';
import { type FoundVersion, findVersions } from './find-version';

const latest = async (sequelize: Sequelize, modelId: string): Promise<FoundVersion | null> => (await findVersions(sequelize, modelId))[0] ?? null;

/** The version's notch: done once the latest is submitted. */
export async function versionWorkStep(sequelize: Sequelize, modelId: string): Promise<StepReport | null> {
  const version = await latest(sequelize, modelId);
  if (!version) return null;
  const name = `version ${version.number}`;
  return version.state === 'In development' ? { state: 'decision', caption: `Submit ${name}` } : { state: 'done', caption: `${name}, ${version.state.toLowerCase()}` };
}

/** The validation's notch: done with the second signature (or a rejection). */
export async function validationWorkStep(sequelize: Sequelize, modelId: string): Promise<StepReport | null> {
  const version = await latest(sequelize, modelId);
  if (!version || version.state === 'In development') return null;
  if (version.state === 'Submitted') return { state: 'decision', caption: 'A validator starts' };
  if (version.state !== 'In validation') return { state: 'done', caption: version.state };
  if (version.concluded) return { state: 'decision', caption: version.returned ? 'Texts returned' : 'Compliance signs' };
  const [{ replications }] = await rows<{ replications: number }>(
    sequelize,
    `SELECT count(*)::int AS replications FROM evidence WHERE version_id = $1 AND kind = 'replication'`,
    [version.id],
  );
  return { state: 'decision', caption: replications === 0 ? 'Replicate' : 'Conclude' };
}

/** The documentation's notch: done once a document of the latest version is made. */
export async function documentationWorkStep(sequelize: Sequelize, modelId: string): Promise<StepReport | null> {
  const version = await latest(sequelize, modelId);
  if (!version) return null;
  const [{ made }] = await rows<{ made: number }>(sequelize, 'SELECT count(*)::int AS made FROM documents WHERE version_id = $1', [version.id]);
  if (made === 0) return version.concluded ? { state: 'decision', caption: 'Make the document' } : null;
  return { state: 'done', caption: made === 1 ? '1 document' : `${made} documents` };
}
