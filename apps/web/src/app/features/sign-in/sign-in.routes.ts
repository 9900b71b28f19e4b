import { type Routes } from '@angular/router';

/** The ways in: for those with an account, for the first admin, for the invited. */
export const signInRoutes: Routes = [
  { path: 'sign-in', title: 'Sign in', loadComponent: () => import('./pages/sign-in-page').then((m) => m.SignInPage) },
  { path: 'set-up', title: 'Set up', loadComponent: () => import('./pages/set-up-page').then((m) => m.SetUpPage) },
  {
    path: 'invitation/:token',
    title: 'Invitation',
    loadComponent: () => import('./pages/invitation-page').then((m) => m.InvitationPage),
  },
];
