import { Routes } from '@angular/router';
import { keepsUnsavedWork } from '../../core/unsaved-changes';
import { DraftStore } from './data/draft-store';

/** The sample: from the file to the definition that everything else rests on. */
export const dataIntakeRoutes: Routes = [
  { path: '', title: 'Sample', loadComponent: () => import('./pages/samples-page').then((m) => m.SamplesPage) },
  {
    path: ':sampleId',
    providers: [DraftStore],
    children: [
      {
        path: '',
        pathMatch: 'full',
        title: 'Sample',
        loadComponent: () => import('./pages/sample-home').then((m) => m.SampleHome),
      },
      {
        path: 'reading',
        title: 'Reading choices',
        loadComponent: () => import('./pages/reading-page').then((m) => m.ReadingPage),
      },
      {
        path: 'columns',
        title: 'Columns',
        canDeactivate: [keepsUnsavedWork],
        loadComponent: () => import('./pages/columns-page').then((m) => m.ColumnsPage),
      },
      {
        path: 'definition',
        title: 'Definition',
        canDeactivate: [keepsUnsavedWork],
        loadComponent: () => import('./pages/definition-page').then((m) => m.DefinitionPage),
      },
    ],
  },
];
