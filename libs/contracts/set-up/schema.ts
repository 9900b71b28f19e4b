import { z } from 'zod';
import { EmailAddress, PersonName } from '../people/schema';
import { NewPassword } from '../session/schema';

/** Open until the first admin exists; never open in the demo. */
export const SetUpState = z.object({ open: z.boolean() }).meta({ id: 'SetUpState' });
export const SetUp = z.strictObject({
  token: z.string().min(20).max(200),
  name: PersonName,
  email: EmailAddress,
  password: NewPassword,
});
