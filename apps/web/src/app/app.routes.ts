import { type Routes } from '@angular/router';
import { able, signedIn } from './core/guards';
import { Frame } from './shell/frame';

/**
 * Every address of the client. Features are loaded when they are visited; inside a model the work's rule leads from step to step, so
 * the steps are children of the model's frame. `modelId` reaches every page below it as an input.
 */
export const routes: Routes = [
  // Before the ways in: their routes have an empty path as well, and would answer the bare address with an empty page.
  { path: '', pathMatch: 'full', redirectTo: 'models' },
  { path: '', loadChildren: () => import('./features/sign-in/sign-in.routes').then((m) => m.signInRoutes) },
  { path: 'unreachable', title: 'Unreachable', loadComponent: () => import('./shell/start-failed').then((m) => m.StartFailed) },
  {
    path: '',
    component: Frame,
    canActivate: [signedIn],
    children: [
      { path: '', pathMatch: 'full', redirectTo: 'models' },
      {
        path: 'models/:modelId',
        canMatch: [(_route, segments) => segments[1]?.path !== 'new'],
        loadComponent: () => import('./shell/model-frame').then((m) => m.ModelFrame),
        children: [
          {
            path: 'sample',
            loadChildren: () => import('./features/data-intake/data-intake.routes').then((m) => m.dataIntakeRoutes),
          },
          { path: 'binning', loadChildren: () => import('./features/binning/binning.routes').then((m) => m.binningRoutes) },
          {
            path: 'fit',
            loadChildren: () => import('./features/model-fitting/model-fitting.routes').then((m) => m.modelFittingRoutes),
          },
          {
            path: 'comparison',
            loadChildren: () => import('./features/comparison/comparison.routes').then((m) => m.comparisonRoutes),
          },
          {
            path: 'scorecard',
            loadChildren: () => import('./features/scorecard/scorecard.routes').then((m) => m.scorecardRoutes),
          },
          { path: 'version', loadChildren: () => import('./features/validation/validation.routes').then((m) => m.versionRoutes) },
          {
            path: 'validation',
            loadChildren: () => import('./features/validation/validation.routes').then((m) => m.validationRoutes),
          },
          {
            path: 'documentation',
            loadChildren: () => import('./features/documentation/documentation.routes').then((m) => m.documentationRoutes),
          },
          {
            path: 'kept-samples',
            loadChildren: () => import('./features/retention/retention.routes').then((m) => m.retentionRoutes),
          },
          { path: '', loadChildren: () => import('./features/models/models.routes').then((m) => m.modelRoutes) },
        ],
      },
      { path: 'models', loadChildren: () => import('./features/models/models.routes').then((m) => m.inventoryRoutes) },
      {
        path: 'reviews',
        canMatch: [able('reviews.read')],
        loadChildren: () => import('./features/validation/validation.routes').then((m) => m.reviewRoutes),
      },
      {
        path: 'documents',
        canMatch: [able('documents.read')],
        loadChildren: () => import('./features/documentation/documentation.routes').then((m) => m.documentRoutes),
      },
      {
        path: 'record',
        canMatch: [able('record.read')],
        loadChildren: () => import('./features/admin/admin.routes').then((m) => m.recordRoutes),
      },
      {
        path: 'people',
        canMatch: [able('people.read')],
        loadChildren: () => import('./features/admin/admin.routes').then((m) => m.peopleRoutes),
      },
      { path: 'account', loadChildren: () => import('./features/account/account.routes').then((m) => m.accountRoutes) },
      { path: '**', title: 'Not found', loadComponent: () => import('./shell/not-found').then((m) => m.NotFound) },
    ],
  },
];
