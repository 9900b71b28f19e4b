import { type Routes } from '@angular/router';

export const peopleRoutes: Routes = [
  { path: '', title: 'People', loadComponent: () => import('./pages/people-page').then((m) => m.PeoplePage) },
];

export const recordRoutes: Routes = [
  { path: '', title: 'Record of actions', loadComponent: () => import('./pages/record-page').then((m) => m.RecordPage) },
];
