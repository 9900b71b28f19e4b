import type { Role } from '@tallystone/contracts/people/schema';

/** `yes`: the visitor gets past authorisation, whatever comes then (a 422 on an empty body, say). Otherwise the status they are refused with. */
export type Verdict = 'yes' | 401 | 403 | 404;
export type ByRole = Readonly<Record<Role, Verdict>>;

/** What a route is asked about: identifiers for its path. */
export type Subject = 'own' | 'another' | 'nonexistent';

/**
 * One route of the route x role table. `own` is a row of a model that the table's modeller works on, `another` the same row asked for by the
 * modeller of another model, `nonexistent` a row that is not there. A route without identifiers in its path has `own` alone.
 */
export interface AccessRow {
  readonly route: string;
  readonly anonymous?: Verdict;
  readonly own?: ByRole;
  readonly another?: ByRole;
  readonly nonexistent?: ByRole;
  readonly headers?: Readonly<Record<string, string>>;
  /** Names of path parameters that stand for something else than the row's subject: taken from the world under this name. */
  readonly params?: Readonly<Record<string, string>>;
  /** The query that the route cannot do without, from the world's identifiers. */
  readonly query?: (world: Readonly<Record<string, string>>) => string;
}

export const everyRole = (verdict: Verdict): ByRole => ({
  modeller: verdict,
  validator: verdict,
  compliance: verdict,
  admin: verdict,
  auditor: verdict,
});
export const only = (roles: readonly Role[], others: Verdict = 403): ByRole => ({
  ...everyRole(others),
  ...Object.fromEntries(roles.map((role) => [role, 'yes'])),
});

/** For anyone, signed in or not. */
export const open = (route: string): AccessRow => ({ route, anonymous: 'yes', own: everyRole('yes') });
/** For roles alone; the same whatever it is about. */
export const forRoles = (route: string, roles: readonly Role[]): AccessRow => ({ route, own: only(roles) });

const gone = everyRole(404);
const refusedElsewhere: ByRole = { modeller: 404, validator: 403, compliance: 403, admin: 404, auditor: 403 };

/** What is inside a model: its modellers, validators, compliance and auditors read it. */
export const readsModel = (route: string): AccessRow => ({
  route,
  own: { ...everyRole('yes'), admin: 404 },
  another: { modeller: 404, validator: 'yes', compliance: 'yes', admin: 404, auditor: 'yes' },
  nonexistent: gone,
});
/** Work on a model: its modellers alone; others who can read it are told so, the rest that there is nothing. */
export const developsModel = (route: string, headers?: Readonly<Record<string, string>>): AccessRow => ({
  route,
  own: { ...refusedElsewhere, modeller: 'yes' },
  another: refusedElsewhere,
  nonexistent: gone,
  headers,
});
