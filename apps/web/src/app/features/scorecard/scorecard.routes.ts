import { type Routes } from '@angular/router';
import { keepsUnsavedWork } from '../../core/unsaved-changes';

export const scorecardRoutes: Routes = [
  {
    path: '',
    title: 'Scorecard',
    canDeactivate: [keepsUnsavedWork],
    loadComponent: () => import('./pages/scorecard-page').then((m) => m.ScorecardPage),
  },
];
