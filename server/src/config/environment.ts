import { resolve } from 'node:path';
import { z } from 'zod';
import { type Keys, readKeys } from './keys';

const databaseUrl = z.string().regex(/^postgres(ql)?:\/\//, 'must be a postgres:// address');
const switchValue = z
  .enum(['0', '1'])
  .default('0')
  .transform((value) => value === '1');
const count = (least: number, most: number, usual: number) => z.coerce.number().int().min(least).max(most).default(usual);

const Environment = z.object({
  PORT: count(0, 65535, 4820),
  HOST: z.string().min(1).default('127.0.0.1'),
  /** The address people type, when it is not loopback: decides the Origin check, the links in mails and whether cookies are for HTTPS only. */
  ORIGIN: z
    .url()
    .transform((value) => new URL(value).origin)
    .optional(),
  DATABASE_URL: databaseUrl,
  /** Needed by migrations alone; a serving process does not hold it. */
  DATABASE_OWNER_URL: databaseUrl.optional(),
  DATABASE_POOL: count(2, 200, 12),
  TALLYSTONE_DATA: z.string().min(1).default('.tallystone'),
  TALLYSTONE_KEYS: z.string().min(1).optional(),
  TALLYSTONE_WEB: z.string().min(1).default('dist/web/browser'),
  TALLYSTONE_DEMO: switchValue,
  /** Whose documents these are: printed on every one. */
  TALLYSTONE_LENDER: z.string().trim().min(1).max(200).optional(),
  TALLYSTONE_THREADS: count(1, 64, 2),
  TALLYSTONE_THREAD_MEMORY_MB: count(256, 65536, 3072),
  TALLYSTONE_LONG_RUNS: count(1, 16, 1),
  METRICS_PORT: count(0, 65535, 0),
  LOG_LEVEL: z.enum(['fatal', 'error', 'warn', 'info', 'debug', 'trace', 'silent']).default('info'),
  MAIL_HOST: z.string().min(1).optional(),
  MAIL_PORT: count(1, 65535, 25),
  MAIL_SECURE: switchValue,
  MAIL_USER: z.string().optional(),
  MAIL_PASSWORD: z.string().optional(),
  MAIL_FROM: z.string().min(3).default('Tallystone <tallystone@localhost>'),
});

export interface Config {
  readonly port: number;
  readonly host: string;
  readonly origin: string | null;
  readonly databaseUrl: string;
  readonly ownerUrl: string | null;
  readonly databasePool: number;
  readonly dataFolder: string;
  readonly webFolder: string;
  readonly demo: boolean;
  readonly lender: string;
  readonly keys: Keys;
  readonly threads: { readonly count: number; readonly memoryMb: number };
  readonly longRuns: number;
  /** 0 = no metrics are served. */
  readonly metricsPort: number;
  readonly logLevel: string;
  readonly mail: {
    /** null = there is no mail server: the demo keeps letters in the data folder, elsewhere they wait in the outbox. */
    readonly host: string | null;
    readonly port: number;
    readonly secure: boolean;
    readonly user: string | null;
    readonly password: string | null;
    readonly from: string;
  };
}

/** A value of the environment that cannot be used; the message names every one of them. */
export class ConfigProblem extends Error {}

/**
 * The configuration from the environment, checked once at the start.
 *
 * @throws ConfigProblem that names each bad value
 * @example
 * const config = readConfig(process.env);
 */
export function readConfig(environment: Readonly<Record<string, string | undefined>>): Config {
  const given = Object.fromEntries(Object.entries(environment).filter(([, value]) => value !== undefined && value !== ''));
  const parsed = Environment.safeParse(given);
  if (!parsed.success) {
    throw new ConfigProblem(
      parsed.error.issues
        .map((issue) => `${issue.path.join('.')}: ${given[String(issue.path[0])] === undefined ? 'is missing' : issue.message}`)
        .join('\n'),
    );
  }
  const value = parsed.data;
  const dataFolder = resolve(value.TALLYSTONE_DATA);
  let keys: Keys;
  try {
    keys = readKeys(resolve(value.TALLYSTONE_KEYS ?? `${dataFolder}/keys.json`));
  } catch (cause) {
    throw new ConfigProblem(`TALLYSTONE_KEYS: ${cause instanceof Error ? cause.message : String(cause)}`);
  }
  return {
    port: value.PORT,
    host: value.HOST,
    origin: value.ORIGIN ?? null,
    databaseUrl: value.DATABASE_URL,
    ownerUrl: value.DATABASE_OWNER_URL ?? null,
    databasePool: value.DATABASE_POOL,
    dataFolder,
    webFolder: resolve(value.TALLYSTONE_WEB),
    demo: value.TALLYSTONE_DEMO,
    lender: value.TALLYSTONE_LENDER ?? (value.TALLYSTONE_DEMO ? 'Saltmarsh Mutual' : 'Lender not named'),
    keys,
    threads: { count: value.TALLYSTONE_THREADS, memoryMb: value.TALLYSTONE_THREAD_MEMORY_MB },
    longRuns: value.TALLYSTONE_LONG_RUNS,
    metricsPort: value.METRICS_PORT,
    logLevel: value.LOG_LEVEL,
    mail: {
      host: value.MAIL_HOST ?? null,
      port: value.MAIL_PORT,
      secure: value.MAIL_SECURE,
      user: value.MAIL_USER ?? null,
      password: value.MAIL_PASSWORD ?? null,
      from: value.MAIL_FROM,
    },
  };
}
