import { problemCodes } from '@tallystone/contracts/problems/codes';
import { Problem, conflict, notFound } from '../problems/problem';
import { rowsErasedCode } from '../problems/rows-erased';

/**
 * What a policy answers: never a bare boolean, because whoever is refused is told why. `as: 404` where the asker may not even know that the
 * thing is there, 409 where rows that it needs were erased (`haveRows`).
 */
export type Decision = { readonly allowed: true } | { readonly allowed: false; readonly reason: string; readonly as: 403 | 404 | 409 };

export const allowed: Decision = { allowed: true };
export const forbidden = (reason: string): Decision => ({ allowed: false, reason, as: 403 });
export const hidden: Decision = { allowed: false, reason: 'not visible', as: 404 };

/** Throws the problem that a refusal stands for. */
export function demand(decision: Decision): void {
  if (decision.allowed) return;
  if (decision.as === 404) throw notFound();
  throw decision.as === 409 ? conflict(rowsErasedCode, decision.reason) : new Problem(403, problemCodes.forbidden, decision.reason);
}
