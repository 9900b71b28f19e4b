import { inject } from '@angular/core';
import { type CanActivateFn, type CanMatchFn, RedirectCommand, Router } from '@angular/router';
import { Session } from './session';

/** Lets signed-in people through; others sign in first and come back to the same address. */
export const signedIn: CanActivateFn = async (_route, state) => {
  const session = inject(Session);
  const router = inject(Router);
  try {
    const view = await session.load();
    if (view.user) return true;
  } catch {
    // Nobody can say who is here. The address stays, so that trying again leads to the same page.
    return new RedirectCommand(router.parseUrl('/unreachable'), { skipLocationChange: true });
  }
  return router.createUrlTree(['/sign-in'], { queryParams: { next: state.url === '/' ? null : state.url } });
};

/** Matches a route only for people with one of these abilities; others see "not found", as the server would answer. */
export function able(...abilities: string[]): CanMatchFn {
  return async () => {
    const session = inject(Session);
    // When the session cannot be read, the frame's own guard says so.
    await session.load().catch(() => null);
    return abilities.some((ability) => session.can(ability));
  };
}
