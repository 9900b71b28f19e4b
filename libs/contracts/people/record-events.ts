import { z } from 'zod';
import { recordEvent } from '../record/event';
import { PersonState, Reason, Role } from './schema';

const Roles = z.strictObject({ roles: z.array(Role) });
const State = z.strictObject({ state: PersonState });
const Subject = z.strictObject({ name: z.string(), email: z.string() });
const Invited = z.strictObject({ name: z.string(), email: z.string(), roles: z.array(Role) });

export const peopleEvents = [
  recordEvent('person.created', 'person', {
    after: Invited,
    detail: z.strictObject({ by: z.enum(['set-up', 'invitation', 'demo']) }),
  }),
  recordEvent('person.roles-changed', 'person', { before: Roles, after: Roles, detail: Subject, reason: Reason }),
  recordEvent('person.disabled', 'person', { before: State, after: State, detail: Subject, reason: Reason }),
  recordEvent('person.enabled', 'person', { before: State, after: State, detail: Subject, reason: Reason }),
  recordEvent('invitation.sent', 'invitation', { after: Invited }),
  recordEvent('invitation.withdrawn', 'invitation', { before: Invited }),
] as const;
