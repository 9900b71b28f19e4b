import type { Role } from '@tallystone/contracts/people/schema';
import type { RecordQuery } from '@tallystone/contracts/record/schema';
import type { Sequelize } from 'sequelize';
import { rows } from '../../database/sql';

export interface RecordEntryRow {
  readonly sequence: number;
  readonly at: Date;
  readonly actorId: string | null;
  readonly actorName: string;
  readonly actorRoles: Role[];
  readonly action: string;
  readonly entity: string;
  readonly entityId: string | null;
  readonly modelId: string | null;
  readonly before: unknown;
  readonly after: unknown;
  readonly detail: unknown;
  readonly reason: string | null;
  readonly hash: string;
  /** Whether the entry belongs to a model that the reader works on. */
  readonly own: boolean;
}

/** How much of the record a reader sees: everything there is an entry of, or the entries of models they work on. */
export interface RecordScope {
  readonly everything: boolean;
  readonly ownModelsOf: string | null;
}

/** A page of the record, latest first, up to one more than the limit (which tells whether there is a next page). */
export async function listRecord(sequelize: Sequelize, query: RecordQuery, scope: RecordScope): Promise<RecordEntryRow[]> {
  const values: unknown[] = [scope.ownModelsOf];
  const where: string[] = [];
  const ask = (condition: (place: string) => string, value: unknown): void => {
    if (value === undefined) return;
    values.push(value);
    where.push(condition(`$${values.length}`));
  };
  ask((at) => `r.sequence < ${at}`, query.before);
  ask((at) => `r.action = ${at}`, query.action);
  ask((at) => `r.entity = ${at}`, query.entity);
  ask((at) => `r.entity_id = ${at}`, query.entityId);
  ask((at) => `r.model_id = ${at}`, query.modelId);
  ask((at) => `r.actor_id = ${at}`, query.actorId);
  ask((at) => `r.at >= ${at}`, query.from);
  ask((at) => `r.at < ${at}`, query.to);
  const own = 'EXISTS (SELECT 1 FROM model_members m WHERE m.model_id = r.model_id AND m.person_id = $1)';
  if (!scope.everything) where.push(own);
  values.push(query.limit + 1);
  const found = await rows<Omit<RecordEntryRow, 'sequence'> & { sequence: string }>(
    sequelize,
    `SELECT r.sequence, r.at, r.actor_id AS "actorId", r.actor_name AS "actorName", r.actor_roles AS "actorRoles", r.action, r.entity,
       r.entity_id AS "entityId", r.model_id AS "modelId", r.before, r.after, r.detail, r.reason, r.hash, ${own} AS own
     FROM record r ${where.length > 0 ? `WHERE ${where.join(' AND ')}` : ''} ORDER BY r.sequence DESC LIMIT $${values.length}`,
    values,
  );
  return found.map((row) => ({ ...row, sequence: Number(row.sequence) }));
}
