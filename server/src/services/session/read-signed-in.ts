import type { Role } from '@tallystone/contracts/people/schema';
import type { Context } from '../../context';
import type { Actor } from '../../models/person';

/** A session ends after an hour without a request and after a day in any case, both by the database's clock. */
export const idleSeconds = 3600;
export const totalSeconds = 24 * 3600;

/**
 * The person of a live session, or null: the account is active, the session neither idle nor too old.
 */
export async function readSignedIn(context: Context, sessionId: string): Promise<Actor | null> {
  const { rows } = await context.pool.query<{ id: string; name: string; email: string; roles: Role[] }>({
    name: 'read-signed-in',
    text: `
      SELECT p.id, p.name, p.email, ARRAY(SELECT r.role FROM person_roles r WHERE r.person_id = p.id ORDER BY r.role) AS roles
      FROM session s JOIN people p ON p.id = s.person_id
      WHERE s.sid = $1 AND p.state = 'active'
        AND s.seen_at > now() - make_interval(secs => ${idleSeconds})
        AND s.started_at > now() - make_interval(secs => ${totalSeconds})`,
    values: [sessionId],
  });
  return rows[0] ?? null;
}
