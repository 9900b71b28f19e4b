import { DestroyRef, Injectable, type Signal, inject } from '@angular/core';
import { type CanDeactivateFn } from '@angular/router';

/** A page that can hold work not yet saved. */
export interface HoldsWork {
  readonly unsaved: Signal<boolean> | (() => boolean);
}

/**
 * Asks before work is lost, and only then: as a route's `canDeactivate` for moves inside the application, and through
 * `warnBeforeUnload` for closing the tab.
 *
 * @example { path: '', component: BinningPage, canDeactivate: [keepsUnsavedWork] }
 */
export const keepsUnsavedWork: CanDeactivateFn<HoldsWork> = async (page) => {
  if (!page?.unsaved?.()) return true;
  return inject(UnsavedWork).mayLeave();
};

/** How the question is put; the frame provides the dialog, so that core needs none. */
@Injectable({ providedIn: 'root' })
export class UnsavedWork {
  private ask: () => Promise<boolean> = async () => globalThis.confirm('Leave without saving? Your changes will be lost.');

  mayLeave(): Promise<boolean> {
    return this.ask();
  }

  askWith(ask: () => Promise<boolean>): void {
    this.ask = ask;
  }
}

/** Call in the constructor of a page that holds work: the browser then asks before the tab closes. */
export function warnBeforeUnload(unsaved: () => boolean): void {
  const listener = (event: BeforeUnloadEvent): void => {
    if (unsaved()) event.preventDefault();
  };
  globalThis.addEventListener('beforeunload', listener);
  inject(DestroyRef).onDestroy(() => globalThis.removeEventListener('beforeunload', listener));
}
