import { type Routes } from '@angular/router';
import { keepsUnsavedWork } from '../../core/unsaved-changes';

export const versionRoutes: Routes = [
  { path: '', title: 'Versions', loadComponent: () => import('./pages/versions-page').then((m) => m.VersionsPage) },
  {
    path: ':versionId',
    title: 'Version',
    canDeactivate: [keepsUnsavedWork],
    loadComponent: () => import('./pages/version-page').then((m) => m.VersionPage),
  },
];

export const validationRoutes: Routes = [
  { path: '', title: 'Validation', loadComponent: () => import('./pages/validations-page').then((m) => m.ValidationsPage) },
  { path: ':versionId', title: 'Validation', loadComponent: () => import('./pages/validation-page').then((m) => m.ValidationPage) },
];

export const reviewRoutes: Routes = [
  { path: '', title: 'Reviews', loadComponent: () => import('./pages/reviews-page').then((m) => m.ReviewsPage) },
];
