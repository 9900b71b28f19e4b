import { type Routes } from '@angular/router';

export const accountRoutes: Routes = [
  { path: '', title: 'Account', loadComponent: () => import('./pages/account-page').then((m) => m.AccountPage) },
];
