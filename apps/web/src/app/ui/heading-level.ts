import { InjectionToken } from '@angular/core';

/** The level of the page's heading here: 1, or 2 inside the model frame, whose h1 is the model's name. Figures sit one below. */
export const HEADING_LEVEL = new InjectionToken<1 | 2>('level of the page heading', { providedIn: 'root', factory: () => 1 });
