import { RecordEvent } from '@tallystone/contracts/record/events';
import type { Transaction } from 'sequelize';
import { rows } from '../../database/sql';
import type { Actor } from '../../models/person';
import { RecordRow } from '../../models/record';
import { type Link, chainStart, hashLink } from './chain';

/** Who did it: a person, or the product itself (a name and no identity). */
export type RecordActor =
  Pick<Actor, 'id' | 'name' | 'roles'> | { readonly id: null; readonly name: string; readonly roles: readonly [] };

/** An act that no person did: the server at its first start, or an unknown person at the door. */
export const nobody = (name: string): RecordActor => ({ id: null, name, roles: [] });

export type NewEntry = RecordEvent & { readonly actor: RecordActor };

const lock = 7_415_002;

/**
 * Appends an act to the record within the transaction of the change itself: both are written or neither is. Links are taken one at a time
 * (an advisory lock held until the transaction ends), so call it as the last statement.
 *
 * @throws when the act is none of `libs/contracts/record/events.ts` or carries a field that its schema does not name
 * @example
 * await appendRecord(tx, { actor: person, action: 'person.disabled', entity: 'person', entityId: id, before: { state: 'active' }, after: { state: 'disabled' }, detail, reason });
 */
export async function appendRecord(tx: Transaction, { actor, ...event }: NewEntry): Promise<{ sequence: number; hash: string }> {
  const known = RecordEvent.parse(event) as ParsedEvent;
  const sequelize = RecordRow.sequelize!;
  await rows(sequelize, 'SELECT pg_advisory_xact_lock($1)', [lock], tx);
  // A statement after the lock: it sees what the holder before committed. The clock is the database's.
  const [last] = await rows<{ sequence: string | null; hash: string | null; now: Date }>(
    sequelize,
    `SELECT l.sequence, l.hash, date_trunc('milliseconds', clock_timestamp()) AS now
     FROM (SELECT 1) AS one LEFT JOIN LATERAL (SELECT sequence, hash FROM record ORDER BY sequence DESC LIMIT 1) AS l ON true`,
    [],
    tx,
  );
  const previous = last.hash ?? chainStart;
  const link: Link = {
    sequence: Number(last.sequence ?? 0) + 1,
    at: last.now.toISOString(),
    actorId: actor.id,
    actorName: actor.name,
    actorRoles: [...actor.roles],
    action: known.action,
    entity: known.entity,
    entityId: known.entityId,
    modelId: known.modelId ?? null,
    before: asJson(known.before),
    after: asJson(known.after),
    detail: asJson(known.detail),
    reason: known.reason ?? null,
  };
  const hash = hashLink(previous, link);
  await rows(
    sequelize,
    `INSERT INTO record (sequence, at, actor_id, actor_name, actor_roles, action, entity, entity_id, model_id, before, after, detail, reason, previous_hash, hash)
     VALUES ($1, $2, $3, $4, $5::text[], $6, $7, $8, $9, $10::jsonb, $11::jsonb, $12::jsonb, $13, $14, $15) RETURNING sequence`,
    [
      link.sequence, link.at, link.actorId, link.actorName, link.actorRoles, link.action, link.entity, link.entityId, link.modelId,
      toColumn(link.before), toColumn(link.after), toColumn(link.detail), link.reason, previous, hash,
    ], // prettier-ignore
    tx,
  );
  return { sequence: link.sequence, hash };
}

interface ParsedEvent {
  action: string;
  entity: string;
  entityId: string | null;
  modelId?: string | null;
  before?: unknown;
  after?: unknown;
  detail?: unknown;
  reason?: string;
}

/** As it will read back: dates become texts, undefined fields go. */
const asJson = (value: unknown): unknown => (value === undefined ? null : JSON.parse(JSON.stringify(value)));
const toColumn = (value: unknown): string | null => (value === null ? null : JSON.stringify(value));
