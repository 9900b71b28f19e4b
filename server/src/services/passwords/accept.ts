import { invalidField } from '../../problems/problem';
import { refusalOf } from './blocklist';

/**
 * Holds a new password against the blocklist (NIST SP 800-63B-4: with the reason said, and no rules of composition).
 *
 * @throws Problem 422 with the reason
 */
export function demandGoodPassword(field: string, password: string, context: readonly string[]): void {
  const refusal = refusalOf(password, context);
  if (refusal !== null) throw invalidField(field, 'password-blocked', `Choose another password. ${refusal}`);
}
