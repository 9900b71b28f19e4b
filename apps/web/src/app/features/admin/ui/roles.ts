import type { Role } from '@tallystone/contracts/people/schema';

/** Roles with what each may do, for whoever gives them (governance: who may do what). */
export const roleWords: Readonly<Record<Role, { readonly name: string; readonly does: string }>> = {
  modeller: { name: 'Modeller', does: 'brings in samples, bins, fits, freezes and submits versions of own models' },
  validator: { name: 'Validator', does: 'replicates, raises findings and gives the first signature' },
  compliance: { name: 'Compliance', does: 'keeps barred fields and reason texts, gives the second signature' },
  admin: { name: 'Admin', does: 'invites people and gives roles; approves nothing' },
  auditor: { name: 'Auditor', does: 'reads everything, changes nothing' },
};

export const allRoles = Object.keys(roleWords) as readonly Role[];

/** "Modeller, validator". */
export function rolesText(roles: readonly Role[]): string {
  if (roles.length === 0) return 'no role';
  const text = allRoles
    .filter((role) => roles.includes(role))
    .map((role) => roleWords[role].name.toLowerCase())
    .join(', ');
  return text[0].toUpperCase() + text.slice(1);
}
