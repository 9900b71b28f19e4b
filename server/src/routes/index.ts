import { comparisonRoutes } from './comparison/index';
import { documentRoutes } from './documents/index';
import { fitRoutes } from './fits/index';
import { healthRoutes } from './health/index';
import { binningRoutes } from './binnings/index';
import { outOfTimeRoutes } from './out-of-time/index';
import { invitationRoutes } from './invitations/index';
import { permissionRoutes } from './permissions/index';
import { peopleRoutes } from './people/index';
import { recordRoutes } from './record/index';
import { runRoutes } from './runs/index';
import { scorecardRoutes } from './scorecards/index';
import { sessionRoutes } from './session/index';
import { setUpRoutes } from './set-up/index';
import { modelRoutes } from './models/index';
import { sampleRoutes } from './samples/index';
import { validationRoutes } from './validation/index';
import { versionRoutes } from './versions/index';
import type { Route } from './http/route';

/** Every route of the server. An entity adds its list here. */
export function allRoutes(): Route[] {
  const routes: Route[] = [...sessionRoutes, ...setUpRoutes, ...invitationRoutes, ...peopleRoutes, ...recordRoutes, ...runRoutes];
  routes.push(...modelRoutes(), ...sampleRoutes());
  routes.push(...fitRoutes, ...comparisonRoutes, ...scorecardRoutes, ...versionRoutes, ...validationRoutes, ...documentRoutes);
  routes.push(...outOfTimeRoutes, ...permissionRoutes, ...binningRoutes);
  routes.push(...healthRoutes(() => routes));
  return routes;
}
