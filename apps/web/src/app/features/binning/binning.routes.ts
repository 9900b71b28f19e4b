import { Routes } from '@angular/router';

/** Binning: no page answers here yet, so the address says "not found" rather than pretend. */
export const binningRoutes: Routes = [
  { path: '', title: 'Binning', loadComponent: () => import('../../shell/not-found').then((m) => m.NotFound) },
];
