import { z } from 'zod';
import { EmailAddress, Role } from '../people/schema';

/** NIST SP 800-63B-4: at least 15 characters where a password stands alone, at least 64 accepted, no rules of composition. */
export const shortestPassword = 15;
export const longestPassword = 200;

export const NewPassword = z
  .string()
  .min(shortestPassword, `Use at least ${shortestPassword} characters`)
  .max(longestPassword, `Use at most ${longestPassword} characters`);

export const SignIn = z.strictObject({ email: EmailAddress, password: z.string().min(1, 'Give the password').max(1000) });
export type SignIn = z.infer<typeof SignIn>;

export const SessionUser = z
  .object({ id: z.uuid(), name: z.string(), email: z.string(), roles: z.array(Role) })
  .meta({ id: 'SessionUser' });

/** `user` is null when signed out: asking who one is is no error. Roles are shown to the person; the client decides by abilities alone. */
export const Session = z
  .object({ user: SessionUser.nullable(), abilities: z.array(z.string()), demo: z.boolean() })
  .meta({ id: 'Session' });
export type Session = z.infer<typeof Session>;

export const ChangePassword = z.strictObject({ current: z.string().min(1).max(1000), next: NewPassword });

export const OwnSession = z
  .object({
    id: z.uuid(),
    startedAt: z.string(),
    seenAt: z.string(),
    address: z.string().nullable(),
    browser: z.string().nullable(),
    current: z.boolean(),
  })
  .meta({ id: 'OwnSession' });
export const OwnSessions = z.object({ sessions: z.array(OwnSession) }).meta({ id: 'OwnSessions' });
export const SessionParams = z.strictObject({ sessionId: z.uuid() });
