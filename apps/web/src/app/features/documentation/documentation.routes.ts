import { Routes } from '@angular/router';

/** Documentation: no page answers here yet, so the address says "not found" rather than pretend. */
export const documentationRoutes: Routes = [
  { path: '', title: 'Documentation', loadComponent: () => import('../../shell/not-found').then((m) => m.NotFound) },
];

/** Documents: no page answers here yet, so the address says "not found" rather than pretend. */
export const documentRoutes: Routes = [
  { path: '', title: 'Documents', loadComponent: () => import('../../shell/not-found').then((m) => m.NotFound) },
];
