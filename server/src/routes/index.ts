import { healthRoutes } from './health/index';
import { outOfTimeRoutes } from './out-of-time/index';
import type { Route } from './http/route';

/** Every route of the server. An entity adds its list here. */
export function allRoutes(): Route[] {
  const routes: Route[] = [];
  routes.push(...outOfTimeRoutes);
  routes.push(...healthRoutes(() => routes));
  return routes;
}
