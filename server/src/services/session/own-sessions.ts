import type { Transaction } from 'sequelize';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import type { Actor } from '../../models/person';
import { appendRecord } from '../record/append';
import { idleSeconds, totalSeconds } from './read-signed-in';

export interface OwnSessionRow {
  readonly id: string;
  readonly sid: string;
  readonly startedAt: Date;
  readonly seenAt: Date;
  readonly address: string | null;
  readonly browser: string | null;
}

/** Live sessions of a person, the one used last first. */
export function listOwnSessions({ sequelize }: Context, personId: string): Promise<OwnSessionRow[]> {
  return rows<OwnSessionRow>(
    sequelize,
    `SELECT public_id AS id, sid, started_at AS "startedAt", seen_at AS "seenAt", sess ->> 'address' AS address, sess ->> 'browser' AS browser
     FROM session WHERE person_id = $1 AND public_id IS NOT NULL AND seen_at > now() - make_interval(secs => ${idleSeconds})
       AND started_at > now() - make_interval(secs => ${totalSeconds}) ORDER BY seen_at DESC`,
    [personId],
  );
}

/** Ends one session of the person themselves; false when they have no such session. */
export async function endOwnSession({ sequelize }: Context, tx: Transaction, actor: Actor, publicId: string): Promise<boolean> {
  const ended = await rows(
    sequelize,
    'DELETE FROM session WHERE person_id = $1 AND public_id = $2 RETURNING sid',
    [actor.id, publicId],
    tx,
  );
  if (ended.length === 0) return false;
  await rows(sequelize, `SELECT pg_notify('tallystone_sessions', $1)`, [actor.id], tx);
  await appendRecord(tx, {
    actor,
    action: 'session.ended',
    entity: 'session',
    entityId: publicId,
    detail: { sessionId: publicId },
  });
  return true;
}
