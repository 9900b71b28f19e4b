import { problemCodes } from '@tallystone/contracts/problems/codes';
import type { Express, RequestHandler } from 'express';
import swaggerUi from 'swagger-ui-express';
import type { Context } from '../../context';
import { Problem } from '../../problems/problem';
import { personOf } from './person-of';
import { apiPageHeaders } from './security-headers';

/** Where people read the description of the API. */
export const apiPagePath = '/api/page';

/**
 * Serves a page that shows the OpenAPI document to whoever is signed in. It comes from a package that writes styles into its elements, so it has
 * a policy of its own; it runs no script but its own files and reaches nothing but this server. Requests are not sent from it: they would need the
 * cross-site token.
 */
export function serveApiPage(app: Express, context: Context): void {
  const signedIn: RequestHandler = async (request, _response, next) => {
    if (!(await personOf(context, request)))
      throw new Problem(401, problemCodes.signedOut, 'You are signed out. Sign in and try again.');
    next();
  };
  // The page names its files beside itself: without the last stroke they would be looked for one folder up.
  const withStroke: RequestHandler = (request, response, next) => {
    if (request.originalUrl.split('?')[0] === apiPagePath) response.redirect(308, `${apiPagePath}/`);
    else next();
  };
  app.use(
    apiPagePath,
    signedIn,
    withStroke,
    apiPageHeaders(context.config),
    swaggerUi.serve,
    swaggerUi.setup(undefined, {
      customSiteTitle: 'Tallystone: API',
      customCss: '.swagger-ui .topbar { display: none }',
      swaggerUrl: '/api/openapi.json',
      swaggerOptions: { supportedSubmitMethods: [], validatorUrl: null, docExpansion: 'none' },
    }),
  );
}
