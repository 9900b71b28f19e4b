import { Routes } from '@angular/router';

/** Fit: no page answers here yet, so the address says "not found" rather than pretend. */
export const modelFittingRoutes: Routes = [
  { path: '', title: 'Fit', loadComponent: () => import('../../shell/not-found').then((m) => m.NotFound) },
];
