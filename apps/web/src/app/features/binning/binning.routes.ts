import { EnvironmentInjector, inject, runInInjectionContext } from '@angular/core';
import { type CanDeactivateFn, type GuardResult, type Routes } from '@angular/router';
import { keepsUnsavedWork } from '../../core/unsaved-changes';
import type { BenchPage } from './pages/bench-page';

/** The bench saves by itself, so leaving saves first; only what could not be saved is asked about. */
const savesFirst: CanDeactivateFn<BenchPage> = async (page, ...rest) => {
  const injector = inject(EnvironmentInjector);
  await page?.flush();
  return runInInjectionContext(injector, () => keepsUnsavedWork(page, ...rest) as Promise<GuardResult>);
};

export const binningRoutes: Routes = [
  { path: '', title: 'Binning', loadComponent: () => import('./pages/binnings-page').then((m) => m.BinningsPage) },
  {
    path: ':binningId',
    title: 'Characteristics',
    loadComponent: () => import('./pages/characteristics-page').then((m) => m.CharacteristicsPage),
  },
  {
    path: ':binningId/correlations',
    title: 'Correlations',
    loadComponent: () => import('./pages/correlations-page').then((m) => m.CorrelationsPage),
  },
  {
    path: ':binningId/history',
    title: 'History of edits',
    loadComponent: () => import('./pages/history-page').then((m) => m.HistoryPage),
  },
  {
    path: ':binningId/:characteristicId',
    title: 'Bins',
    canDeactivate: [savesFirst],
    loadComponent: () => import('./pages/bench-page').then((m) => m.BenchPage),
  },
];
