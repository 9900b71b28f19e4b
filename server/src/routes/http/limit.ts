import { problemCodes } from '@tallystone/contracts/problems/codes';
import type { RequestHandler } from 'express';
import { rateLimit } from 'express-rate-limit';
import { Problem } from '../../problems/problem';

/**
 * A bound on what one session, or one address without a session, may ask in a minute: far above what people do, below what a runaway
 * script does. Guessing of passwords is held back separately and strictly (services/session/throttle.ts).
 */
export function limitRequests(): RequestHandler {
  return rateLimit({
    windowMs: 60_000,
    limit: (request) => (request.session?.passport?.user ? 3000 : 1200),
    // The address is used whole; IPv6 neighbours are not taken together.
    keyGenerator: (request) => (request.session?.passport?.user ? request.sessionID : `address ${request.ip ?? 'unknown'}`),
    validate: false,
    standardHeaders: false,
    legacyHeaders: false,
    handler: () => {
      throw new Problem(429, problemCodes.tooMany, 'Too many requests within a minute. Wait a little.', {
        headers: { 'Retry-After': '60' },
      });
    },
  });
}
