import type { Definition, DefinitionList, SampleDefinitionContent } from '@tallystone/contracts/samples/definition';
import type { ResultCounts } from '@tallystone/contracts/result/types';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';
import type { StoredCounts } from '../../models/sample';
import type { Prepared } from '../../replay/types';
import { readAssignment } from '../../storage/assignmentStore';
import { outOfTimeState } from '../out-of-time/cover';
import { covered } from './cover-counts';
import type { FoundSample } from './find-sample';

interface Row {
  readonly id: string;
  readonly sampleId: string;
  readonly modelId: string;
  readonly number: number;
  readonly content: SampleDefinitionContent;
  readonly counts: StoredCounts;
  readonly sha256: string;
  readonly createdAt: Date;
  readonly createdBy: string;
}

const select = `
  SELECT d.id, d.sample_id AS "sampleId", d.model_id AS "modelId", d.number, d.content, d.counts, d.sha256, d.created_at AS "createdAt",
         p.name AS "createdBy"
    FROM sample_definitions d JOIN people p ON p.id = d.created_by`;

async function present(
  sequelize: Sequelize,
  { counts: { result: _result, ...stored }, createdAt, ...row }: Row,
): Promise<Definition> {
  // What was confirmed before a count was kept does not have it.
  const { sensitivity = null, byRule = null } = stored as Partial<StoredCounts>;
  const counts = { ...stored, sensitivity, byRule };
  const state = await outOfTimeState(sequelize, row.id);
  return { ...row, createdAt: createdAt.toISOString(), counts: state === 'covered' ? covered(counts) : counts };
}

/** Definitions of a sample, latest first, without their content. */
export async function listDefinitions(sequelize: Sequelize, sample: FoundSample): Promise<DefinitionList> {
  const list = await rows<Row>(sequelize, `${select} WHERE d.sample_id = $1 ORDER BY d.number DESC`, [sample.id]);
  const definitions = await Promise.all(list.map((row) => present(sequelize, row)));
  return { definitions: definitions.map(({ content: _content, ...summary }) => summary) };
}

export async function readDefinition(
  sequelize: Sequelize,
  sample: FoundSample,
  definitionId: string,
): Promise<Definition | null> {
  const [row] = await rows<Row>(sequelize, `${select} WHERE d.sample_id = $1 AND d.id = $2`, [sample.id, definitionId]);
  return row ? present(sequelize, row) : null;
}

/** A confirmed definition as other parts of the work need it: what it says, and of which sample. */
export interface FoundDefinition {
  readonly id: string;
  readonly sampleId: string;
  readonly modelId: string;
  readonly number: number;
  readonly content: SampleDefinitionContent;
  readonly sha256: string;
  readonly rows: number;
  readonly counts: ResultCounts;
}

export async function findDefinition(
  sequelize: Sequelize,
  definitionId: string,
  tx: Transaction | null = null,
): Promise<FoundDefinition | null> {
  const [row] = await rows<Omit<FoundDefinition, 'counts'> & { counts: StoredCounts }>(
    sequelize,
    `SELECT d.id, d.sample_id AS "sampleId", d.model_id AS "modelId", d.number, d.content, d.sha256, s.rows, d.counts
       FROM sample_definitions d JOIN samples s ON s.id = d.sample_id WHERE d.id = $1`,
    [definitionId],
    tx,
  );
  return row ? { ...row, counts: row.counts.result } : null;
}

/**
 * Who is in which partition as what, as `prepare` gave it when the definition was confirmed. Folds are for the fit to draw.
 *
 * @example
 * const prepared = await loadPrepared(sequelize, definitionId);
 */
export async function loadPrepared(sequelize: Sequelize, definitionId: string): Promise<Prepared> {
  const definition = await findDefinition(sequelize, definitionId);
  if (!definition) throw new Error(`There is no sample definition ${definitionId}`);
  const assignment = await readAssignment(sequelize, definitionId, definition.rows);
  return { rows: definition.rows, ...assignment, folds: null, foldCount: 0, counts: definition.counts };
}
