import { Routes } from '@angular/router';

/** Comparison: no page answers here yet, so the address says "not found" rather than pretend. */
export const comparisonRoutes: Routes = [
  { path: '', title: 'Comparison', loadComponent: () => import('../../shell/not-found').then((m) => m.NotFound) },
];
