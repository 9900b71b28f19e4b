import { problemCodes } from '@tallystone/contracts/problems/codes';
import { Problem, notFound } from '../problems/problem';

/**
 * What a policy answers: never a bare boolean, because whoever is refused is told why. `as: 404` where the asker may not even know that the
 * thing is there.
 */
export type Decision = { readonly allowed: true } | { readonly allowed: false; readonly reason: string; readonly as: 403 | 404 };

export const allowed: Decision = { allowed: true };
export const forbidden = (reason: string): Decision => ({ allowed: false, reason, as: 403 });
export const hidden: Decision = { allowed: false, reason: 'not visible', as: 404 };

/** Throws the problem that a refusal stands for. */
export function demand(decision: Decision): void {
  if (decision.allowed) return;
  throw decision.as === 404 ? notFound() : new Problem(403, problemCodes.forbidden, decision.reason);
}
