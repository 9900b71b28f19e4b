import { z } from 'zod';

/** Roles of product.md; one person may hold several. */
export const roles = ['modeller', 'validator', 'compliance', 'admin', 'auditor'] as const;
export const Role = z.enum(roles).meta({ id: 'Role' });
export type Role = z.infer<typeof Role>;

export const RoleList = z
  .array(Role)
  .max(roles.length)
  .refine((list) => new Set(list).size === list.length, { message: 'A role is named twice' });

/** Kept lower-case, because two accounts that differ by case alone would be one mailbox. */
export const EmailAddress = z.email('Not an e-mail address').max(254).trim().toLowerCase();
export const PersonName = z.string().trim().min(1, 'Give a name').max(200);
export const Reason = z.string().trim().min(1, 'Give a reason').max(2000);

export const PersonState = z.enum(['active', 'disabled']);
export type PersonState = z.infer<typeof PersonState>;

/** What the reader may do with this person; the client asks for these and never for a role. */
export const PersonAbility = z.enum(['change-roles', 'disable', 'enable']);
export type PersonAbility = z.infer<typeof PersonAbility>;

export const Person = z
  .object({
    id: z.uuid(),
    name: z.string(),
    email: z.string(),
    roles: z.array(Role),
    state: PersonState,
    createdAt: z.string(),
    lastSignInAt: z.string().nullable(),
    revision: z.int(),
    abilities: z.array(PersonAbility),
  })
  .meta({ id: 'Person' });
export type Person = z.infer<typeof Person>;

export const PersonParams = z.strictObject({ personId: z.uuid() });
export const PersonList = z.object({ people: z.array(Person) }).meta({ id: 'PersonList' });
export const ChangeRoles = z.strictObject({ roles: RoleList, reason: Reason });
export const ChangeState = z.strictObject({ reason: Reason });
