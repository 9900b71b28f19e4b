import { Routes } from '@angular/router';

/** Scorecard: no page answers here yet, so the address says "not found" rather than pretend. */
export const scorecardRoutes: Routes = [
  { path: '', title: 'Scorecard', loadComponent: () => import('../../shell/not-found').then((m) => m.NotFound) },
];
