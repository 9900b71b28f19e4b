import { type Routes } from '@angular/router';
import { keepsUnsavedWork } from '../../core/unsaved-changes';

/** The inventory: all models one may see, and entering a new one. */
export const inventoryRoutes: Routes = [
  { path: '', title: 'Models', loadComponent: () => import('./pages/inventory-page').then((m) => m.InventoryPage) },
  {
    path: 'new',
    title: 'New model',
    canDeactivate: [keepsUnsavedWork],
    loadComponent: () => import('./pages/new-model-page').then((m) => m.NewModelPage),
  },
];

/** Inside one model: what is written about it. */
export const modelRoutes: Routes = [
  {
    path: '',
    title: 'About',
    canDeactivate: [keepsUnsavedWork],
    loadComponent: () => import('./pages/about-page').then((m) => m.AboutPage),
  },
];
