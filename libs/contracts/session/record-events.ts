import { z } from 'zod';
import { recordEvent } from '../record/event';

const Where = { address: z.string().nullable() };

export const sessionEvents = [
  recordEvent('session.signed-in', 'session', { detail: z.strictObject(Where) }),
  // The address typed is kept only when it is a known account: people type passwords into the wrong field.
  recordEvent('session.sign-in-failed', 'session', {
    detail: z.strictObject({ ...Where, email: z.string().nullable(), cause: z.enum(['wrong', 'disabled', 'throttled']) }),
  }),
  recordEvent('session.signed-out', 'session', { detail: z.strictObject(Where) }),
  recordEvent('session.ended', 'session', { detail: z.strictObject({ sessionId: z.uuid() }) }),
  recordEvent('password.changed', 'person', { detail: z.strictObject(Where) }),
] as const;
