import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { inTransaction } from '../../database/transaction';
import { fn } from 'sequelize';
import { Invitation } from '../../models/invitation';
import { Problem } from '../../problems/problem';
import { hashToken } from '../one-time-token';
import { demandGoodPassword } from '../passwords/accept';
import { hashPassword } from '../passwords/prepare';
import { createPerson } from '../people/create';

interface Open {
  readonly id: string;
  readonly name: string;
  readonly email: string;
  readonly expiresAt: Date;
}

/** An invitation that does not exist, was used, withdrawn or has run out: one answer for all. */
const gone = (): Problem =>
  new Problem(404, 'invitation-gone', 'This invitation was used, withdrawn or has run out. Ask an admin for a new one.');

/** Whom a link is for. @throws Problem 404 */
export async function lookUpInvitation({ sequelize }: Context, token: string): Promise<Open> {
  const [open] = await rows<Open>(
    sequelize,
    `SELECT id, name, email, expires_at AS "expiresAt" FROM invitations
     WHERE token_hash = $1 AND accepted_at IS NULL AND withdrawn_at IS NULL AND expires_at > now()`,
    [hashToken(token)],
  );
  if (!open) throw gone();
  return open;
}

/** Opens the account an invitation is for, with the roles that the admin chose. @throws Problem 404, 409, 422 */
export async function acceptInvitation(
  context: Context,
  asked: { token: string; name: string; password: string },
): Promise<{ email: string }> {
  const open = await lookUpInvitation(context, asked.token);
  demandGoodPassword('password', asked.password, [asked.name, open.email]);
  const passwordHash = await hashPassword(context, asked.password);
  return inTransaction(context.sequelize, async (tx) => {
    const invitation = await Invitation.findByPk(open.id, { transaction: tx, lock: tx.LOCK.UPDATE });
    if (!invitation || invitation.acceptedAt || invitation.withdrawnAt) throw gone();
    await invitation.update({ acceptedAt: fn('now') }, { transaction: tx });
    await createPerson(tx, {
      name: asked.name,
      email: invitation.email,
      passwordHash,
      roles: invitation.roles,
      by: 'invitation',
    });
    return { email: invitation.email };
  });
}
