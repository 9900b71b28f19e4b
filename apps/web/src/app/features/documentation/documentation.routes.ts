import { type Routes } from '@angular/router';

export const documentationRoutes: Routes = [
  {
    path: '',
    title: 'Documentation',
    loadComponent: () => import('./pages/versions-to-document-page').then((m) => m.VersionsToDocumentPage),
  },
  {
    path: ':versionId',
    title: 'Documentation',
    loadComponent: () => import('./pages/version-documents-page').then((m) => m.VersionDocumentsPage),
  },
];

export const documentRoutes: Routes = [
  { path: '', title: 'Documents', loadComponent: () => import('./pages/documents-page').then((m) => m.DocumentsPage) },
];
