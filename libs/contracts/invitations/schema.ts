import { z } from 'zod';
import { EmailAddress, PersonName, Role, RoleList } from '../people/schema';
import { NewPassword } from '../session/schema';

export const Invite = z.strictObject({ name: PersonName, email: EmailAddress, roles: RoleList });

export const Invitation = z
  .object({
    id: z.uuid(),
    name: z.string(),
    email: z.string(),
    roles: z.array(Role),
    state: z.enum(['open', 'accepted', 'withdrawn', 'expired']),
    invitedBy: z.string(),
    createdAt: z.string(),
    expiresAt: z.string(),
    mail: z.enum(['waiting', 'sent', 'failed']),
  })
  .meta({ id: 'Invitation' });
export const InvitationList = z.object({ invitations: z.array(Invitation) }).meta({ id: 'InvitationList' });
export const InvitationParams = z.strictObject({ invitationId: z.uuid() });

/** Tokens travel in bodies, never in paths: paths are logged. */
const Token = z.string().min(20).max(200);
export const LookUpInvitation = z.strictObject({ token: Token });
export const InvitationPreview = z
  .object({ name: z.string(), email: z.string(), expiresAt: z.string() })
  .meta({ id: 'InvitationPreview' });
export const AcceptInvitation = z.strictObject({ token: Token, name: PersonName, password: NewPassword });
export const Accepted = z.object({ email: z.string() }).meta({ id: 'Accepted' });
