import { EnvironmentInjector, inject, runInInjectionContext } from '@angular/core';
import { type CanDeactivateFn, type GuardResult, type Routes } from '@angular/router';
import { type HoldsWork, keepsUnsavedWork } from '../../core/unsaved-changes';
import { DictionaryStore } from './data/dictionary-store';
import { DraftStore } from './data/draft-store';

/** The draft saves by itself, so leaving saves first; only what could not be saved is asked about. */
const savesFirst: CanDeactivateFn<HoldsWork> = async (page, ...rest) => {
  const injector = inject(EnvironmentInjector);
  await inject(DraftStore).flush();
  return runInInjectionContext(injector, () => keepsUnsavedWork(page, ...rest) as Promise<GuardResult>);
};

/** The sample: from the file to the definition that everything else rests on. */
export const dataIntakeRoutes: Routes = [
  { path: '', title: 'Sample', loadComponent: () => import('./pages/samples-page').then((m) => m.SamplesPage) },
  {
    path: ':sampleId',
    providers: [DraftStore, DictionaryStore],
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
        canDeactivate: [savesFirst],
        loadComponent: () => import('./pages/columns-page').then((m) => m.ColumnsPage),
      },
      {
        path: 'definition',
        title: 'Definition',
        canDeactivate: [savesFirst],
        loadComponent: () => import('./pages/definition-page').then((m) => m.DefinitionPage),
      },
      {
        path: 'quality',
        title: 'Data quality',
        loadComponent: () => import('./pages/quality-page').then((m) => m.QualityPage),
      },
    ],
  },
];
