import { problemCodes } from '@tallystone/contracts/problems/codes';
import type { Request } from 'express';
import { Problem } from '../../problems/problem';

/** The entity tag of a revision: strong, because a change is applied to exactly that state. */
export const tagOf = (revision: number | string): string => `"${revision}"`;

/**
 * Holds If-Match against the revision as it is now.
 *
 * @throws Problem 428 when the header is missing, 412 with the revision now in ETag when it names another
 */
export function matchRevision(request: Request, revision: number | string): void {
  const sent = request.headers['if-match'];
  if (sent === undefined) {
    throw new Problem(428, problemCodes.matchMissing, 'State which revision you change: send its entity tag in If-Match.');
  }
  const tags = sent.split(',').map((tag) => tag.trim());
  if (!tags.includes(tagOf(revision))) {
    throw new Problem(
      412,
      problemCodes.stale,
      'Someone else changed this since you read it. Look at it as it is now, then decide.',
      {
        headers: { ETag: tagOf(revision) },
      },
    );
  }
}
