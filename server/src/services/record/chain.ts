import { createHash } from 'node:crypto';
import canonicalize from 'canonicalize';

/** What a link's hash is taken over, beside the hash before it. Times are ISO with milliseconds, absent parts are null. */
export interface Link {
  readonly sequence: number;
  readonly at: string;
  readonly actorId: string | null;
  readonly actorName: string;
  readonly actorRoles: readonly string[];
  readonly action: string;
  readonly entity: string;
  readonly entityId: string | null;
  readonly modelId: string | null;
  readonly before: unknown;
  readonly after: unknown;
  readonly detail: unknown;
  readonly reason: string | null;
}

/** What the first link follows. */
export const chainStart = '0'.repeat(64);

/**
 * Hash of a link: SHA-256, in hexadecimal, over the previous hash (its 64 digits), a line feed, and the RFC 8785 canonical JSON of the link.
 *
 * @example
 * hashLink(chainStart, link) // '5f2c…'
 */
export function hashLink(previous: string, link: Link): string {
  const { sequence, at, actorId, actorName, actorRoles, action, entity, entityId, modelId, before, after, detail, reason } = link;
  const text = canonicalize({
    sequence,
    at,
    actorId,
    actorName,
    actorRoles,
    action,
    entity,
    entityId,
    modelId,
    before,
    after,
    detail,
    reason,
  });
  return createHash('sha256').update(`${previous}\n${text}`).digest('hex');
}
