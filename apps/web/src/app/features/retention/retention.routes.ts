import { type Routes } from '@angular/router';

/** What is kept of applicants in a model, and for an admin its erasure. */
export const retentionRoutes: Routes = [
  { path: '', title: 'Kept of applicants', loadComponent: () => import('./pages/kept-page').then((m) => m.KeptPage) },
];
