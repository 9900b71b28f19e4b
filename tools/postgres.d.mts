/** A condition the person at the keyboard can do something about: shown as one message, never as a stack. */
export class SetupProblem extends Error {}

export interface PostgresAddresses {
  readonly port: number;
  readonly appUrl: string;
  readonly ownerUrl: string;
  readonly superuserUrl: string;
}

export interface StartOptions {
  readonly data: string;
  /** Trades safety for speed and lets the owner role create databases. */
  readonly test?: boolean;
  readonly port?: number;
  readonly say?: (line: string) => void;
}

/** Starts (or finds running) the PostgreSQL of a data folder and makes sure of its roles and database. */
export function startPostgres(options: StartOptions): Promise<PostgresAddresses & { readonly alreadyRunning: boolean }>;

/** Stops the PostgreSQL of a data folder; resolves to false when none was running. */
export function stopPostgres(options: { readonly data: string; readonly say?: (line: string) => void }): Promise<boolean>;

/** Addresses of a data folder's database as last started, and whether a server answers there. */
export function postgresStatus(options: {
  readonly data: string;
}): Promise<{ readonly running: boolean } & Partial<PostgresAddresses>>;
