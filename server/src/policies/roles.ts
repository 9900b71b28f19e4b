import type { Role } from '@tallystone/contracts/people/schema';

/** Whether a person holds at least one of some roles. */
export const holds = (person: { readonly roles: readonly Role[] }, ...roles: Role[]): boolean =>
  roles.some((role) => person.roles.includes(role));
