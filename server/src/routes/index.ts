import { healthRoutes } from './health/index';
import type { Route } from './http/route';

/** Every route of the server. An entity adds its list here. */
export function allRoutes(): Route[] {
  const routes: Route[] = [];
  routes.push(...healthRoutes(() => routes));
  return routes;
}
