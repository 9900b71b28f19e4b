import { type Routes } from '@angular/router';

export const comparisonRoutes: Routes = [
  { path: '', title: 'Comparison', loadComponent: () => import('./pages/comparison-page').then((m) => m.ComparisonPage) },
];
