import express, { type Express } from 'express';
import type { Context } from './context';
import { notFound } from './problems/problem';
import { serveApiPage } from './routes/http/api-page';
import { answerErrors } from './routes/http/errors';
import { mountRoutes } from './routes/http/mount';
import { servePages } from './routes/http/pages';
import { logRequests } from './routes/http/request-log';
import type { Route } from './routes/http/route';
import { apiHeaders } from './routes/http/security-headers';
import { sessionCookie } from './routes/http/session-cookie';
import { allRoutes } from './routes/index';

/**
 * Builds the Express application from a context; it never listens.
 *
 * How an entity plugs in, one file each, named after the entity:
 *
 * 1. `libs/contracts/<entity>/` — `schema.ts` (zod, strict bodies), `endpoints.ts` (`defineEndpoint`), `abilities.ts`, `record-events.ts`
 *    (`recordEvent`, then one entry in `contracts/record/events.ts`).
 * 2. `server/src/migrations/NNNN-<entity>.ts` — tables and explicit GRANTs to the application; one entry in `migrations/index.ts`.
 * 3. `server/src/models/<entity>.ts` — Sequelize models; one entry in `models/index.ts`.
 * 4. `server/src/policies/<entity>.ts` — decisions with reasons; abilities that need no row go into `policies/abilities.ts`.
 * 5. `server/src/services/<entity>/<verb>.ts` — use cases; changes call `appendRecord(tx, …)` last.
 * 6. `server/src/routes/<entity>/index.ts` — `defineRoute(endpoint, recipe)`; one entry in `routes/index.ts`, one row for each route in
 *    `tests/api/access/` (a route that is missing there fails the tests).
 * 7. Work that takes time: `jobs/definitions/<entity>.ts` (`defineJob`), `jobs/handlers/<entity>.ts` (`handle`), one entry in
 *    `jobs/handlers/index.ts`; started by `startRun(tx, …)`. Numbers run in `threads/tasks.ts` through `runInThread`.
 */
export function buildApp(context: Context, routes: readonly Route[] = allRoutes()): Express {
  const app = express();
  app.disable('x-powered-by');
  // Entity tags state revisions here, not hashes of bodies.
  app.disable('etag');
  app.set('trust proxy', context.config.origin === null ? false : 'loopback');
  app.use(logRequests(context.log));
  app.use(['/api', '/health'], apiHeaders(context.config));
  app.use('/api', sessionCookie(context));
  mountRoutes(app, context, routes);
  serveApiPage(app, context);
  app.use(['/api', '/health'], () => {
    throw notFound();
  });
  servePages(app, context);
  app.use(answerErrors(context));
  return app;
}
