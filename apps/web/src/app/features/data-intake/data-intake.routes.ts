import { Routes } from '@angular/router';

/** Sample: no page answers here yet, so the address says "not found" rather than pretend. */
export const dataIntakeRoutes: Routes = [
  { path: '', title: 'Sample', loadComponent: () => import('../../shell/not-found').then((m) => m.NotFound) },
];
