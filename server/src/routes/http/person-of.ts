import type { Request } from 'express';
import type { Context } from '../../context';
import type { Actor } from '../../models/person';
import { readSignedIn } from '../../services/session/read-signed-in';

/**
 * Who sends this request: read from the database each time, so that a role taken or an account disabled counts from the next request on.
 */
export async function personOf(context: Context, request: Request): Promise<Actor | null> {
  if (!request.session?.passport?.user) return null;
  return readSignedIn(context, request.sessionID);
}
