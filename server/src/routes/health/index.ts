import { live, openApi, ready } from '@tallystone/contracts/health/endpoints';
import { readiness } from '../../database/readiness';
import type { Route } from '../http/route';
import { defineRoute } from '../http/route';
import { describeApi } from './open-api';

/** Liveness, readiness and the description of the API. `described` gives every route, this one too. */
export function healthRoutes(described: () => readonly Route[]): Route[] {
  let description: Record<string, unknown> | null = null;
  return [
    defineRoute(live, { access: 'anyone', act: () => ({ status: 'ok' as const }) }),
    defineRoute(ready, {
      access: 'anyone',
      async act({ context, response }) {
        if (context.stopping.aborted) {
          response.status(503);
          return { status: 'stopping' as const };
        }
        const state = await readiness(context.sequelize);
        if (state !== 'ok') response.status(503);
        return { status: state };
      },
    }),
    defineRoute(openApi, { access: 'signed-in', act: () => (description ??= describeApi(described())) }),
  ];
}
