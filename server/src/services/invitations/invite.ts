import type { Role } from '@tallystone/contracts/people/schema';
import { fn, type Transaction } from 'sequelize';
import type { Config } from '../../config/environment';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { invitationLetter } from '../../mail/invitation-letter';
import { postLetter } from '../../mail/letter';
import { Invitation } from '../../models/invitation';
import { type Actor, Person } from '../../models/person';
import { conflict } from '../../problems/problem';
import { makeToken } from '../one-time-token';
import { appendRecord } from '../record/append';

export interface InvitationRow {
  readonly id: string;
  readonly name: string;
  readonly email: string;
  readonly roles: Role[];
  readonly state: 'open' | 'accepted' | 'withdrawn' | 'expired';
  readonly invitedBy: string;
  readonly createdAt: Date;
  readonly expiresAt: Date;
  readonly mail: 'waiting' | 'sent' | 'failed';
}

const days = 7;

const select = `
  SELECT i.id, i.name, i.email, i.roles, p.name AS "invitedBy", i.created_at AS "createdAt", i.expires_at AS "expiresAt", m.state AS mail,
    CASE WHEN i.accepted_at IS NOT NULL THEN 'accepted' WHEN i.withdrawn_at IS NOT NULL THEN 'withdrawn'
         WHEN i.expires_at <= now() THEN 'expired' ELSE 'open' END AS state
  FROM invitations i JOIN people p ON p.id = i.invited_by JOIN mail_outbox m ON m.id = i.mail_id`;

export function listInvitations({ sequelize }: Context): Promise<InvitationRow[]> {
  return rows<InvitationRow>(sequelize, `${select} ORDER BY i.created_at DESC LIMIT 500`);
}

export async function findInvitation(
  { sequelize }: Context,
  id: string,
  tx: Transaction | null = null,
): Promise<InvitationRow | null> {
  const [found] = await rows<InvitationRow>(sequelize, `${select} WHERE i.id = $1 ${tx ? 'FOR UPDATE OF i' : ''}`, [id], tx);
  return found ?? null;
}

/**
 * Invites a person: the link is good for seven days, once, and leaves by mail only.
 *
 * @throws Problem 409 when the address has an account or an open invitation
 */
export async function invite(
  context: Context,
  tx: Transaction,
  actor: Actor,
  asked: { name: string; email: string; roles: Role[] },
): Promise<InvitationRow> {
  const { sequelize, config } = context;
  await rows(sequelize, `SELECT pg_advisory_xact_lock(hashtextextended('invite:' || $1, 0))`, [asked.email], tx);
  if (await Person.findOne({ where: { email: asked.email }, attributes: ['id'], transaction: tx })) {
    throw conflict('email-taken', 'There is an account with this address already.');
  }
  const open = await rows(
    sequelize,
    `${select} WHERE i.email = $1 AND i.accepted_at IS NULL AND i.withdrawn_at IS NULL AND i.expires_at > now()`,
    [asked.email],
    tx,
  );
  if (open.length > 0)
    throw conflict('already-invited', 'There is an open invitation for this address. Withdraw it to send another.');
  const { token, hash } = makeToken();
  const [{ until }] = await rows<{ until: Date }>(sequelize, `SELECT now() + interval '${days} days' AS until`, [], tx);
  const link = `${addressOf(config)}/invitation/${token}`;
  const mailId = await postLetter(
    context,
    tx,
    invitationLetter({ to: asked.email, name: asked.name, from: actor.name, link, days }),
  );
  const made = await Invitation.create(
    { ...asked, tokenHash: hash, invitedBy: actor.id, mailId, expiresAt: until },
    { transaction: tx },
  );
  await appendRecord(tx, { actor, action: 'invitation.sent', entity: 'invitation', entityId: made.id, after: asked });
  return (await findInvitation(context, made.id, tx))!;
}

export async function withdrawInvitation(
  context: Context,
  tx: Transaction,
  actor: Actor,
  subject: InvitationRow,
): Promise<InvitationRow> {
  if (subject.state !== 'open')
    throw conflict('not-open', `This invitation is ${subject.state}; only an open one can be withdrawn.`);
  await Invitation.update({ withdrawnAt: fn('now') }, { where: { id: subject.id }, transaction: tx });
  const { name, email, roles } = subject;
  await appendRecord(tx, {
    actor,
    action: 'invitation.withdrawn',
    entity: 'invitation',
    entityId: subject.id,
    before: { name, email, roles },
  });
  return (await findInvitation(context, subject.id, tx))!;
}

/** Where people reach the product: links in letters begin with it. */
const addressOf = (config: Config): string => config.origin ?? `http://localhost:${config.port}`;
