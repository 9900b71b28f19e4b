import { Routes } from '@angular/router';

/** Version: no page answers here yet, so the address says "not found" rather than pretend. */
export const versionRoutes: Routes = [
  { path: '', title: 'Version', loadComponent: () => import('../../shell/not-found').then((m) => m.NotFound) },
];

/** Validation: no page answers here yet, so the address says "not found" rather than pretend. */
export const validationRoutes: Routes = [
  { path: '', title: 'Validation', loadComponent: () => import('../../shell/not-found').then((m) => m.NotFound) },
];

/** Reviews: no page answers here yet, so the address says "not found" rather than pretend. */
export const reviewRoutes: Routes = [
  { path: '', title: 'Reviews', loadComponent: () => import('../../shell/not-found').then((m) => m.NotFound) },
];
