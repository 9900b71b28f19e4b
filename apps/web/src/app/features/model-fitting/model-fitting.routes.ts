import { type Routes } from '@angular/router';
import { keepsUnsavedWork } from '../../core/unsaved-changes';

export const modelFittingRoutes: Routes = [
  { path: '', title: 'Fits', loadComponent: () => import('./pages/fits-page').then((m) => m.FitsPage) },
  {
    path: 'new',
    title: 'New fit',
    canDeactivate: [keepsUnsavedWork],
    loadComponent: () => import('./pages/new-fit-page').then((m) => m.NewFitPage),
  },
  { path: ':fitId', title: 'Fit', loadComponent: () => import('./pages/fit-page').then((m) => m.FitPage) },
];
