import { type ChildProcess, spawn } from 'node:child_process';
import { closeSync, openSync, readFileSync, readSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { Role } from '@tallystone/contracts/people/schema';
import { readConfig } from '../../server/src/config/environment';
import { openContext } from '../../server/src/context';
import { inTransaction } from '../../server/src/database/transaction';
import { createLog } from '../../server/src/logging/log';
import { migrate } from '../../server/src/migrations/migrate';
import { hashPassword } from '../../server/src/services/passwords/prepare';
import { createPerson } from '../../server/src/services/people/create';
import { stopThreads } from '../../server/src/threads/run-in-thread';
import { ensureKeys } from '../../tools/keys.mjs';
import type { PostgresAddresses } from '../../tools/postgres.mjs';
import { type Visitor, testPassword } from '../support/intake';
import { patchUpload } from '../support/server-process';

/** The built product in processes of its own, as it is measured: its database, its people, its services. */

const piece = 8 * 1024 * 1024;
const root = fileURLToPath(new URL('../..', import.meta.url));

export interface PreparedProduct<Name extends string> {
  readonly environment: Record<string, string>;
  readonly people: Readonly<Record<Name, { readonly id: string; readonly email: string }>>;
}

/** Migrates an empty database and makes people, all with the password of the tests. */
export async function prepareProduct<Name extends string>(
  addresses: PostgresAddresses,
  data: string,
  roles: Readonly<Record<Name, Role[]>>,
): Promise<PreparedProduct<Name>> {
  const environment = {
    DATABASE_URL: addresses.appUrl,
    TALLYSTONE_DATA: data,
    TALLYSTONE_KEYS: ensureKeys(data),
    LOG_LEVEL: process.env.BENCH_LOG_LEVEL ?? 'error',
    PORT: '0',
  };
  await migrate(addresses.ownerUrl, addresses.appUrl);
  const config = readConfig(environment);
  const context = await openContext(config, createLog(config.logLevel));
  const passwordHash = await hashPassword(context, testPassword);
  const people = {} as Record<Name, { id: string; email: string }>;
  for (const name of Object.keys(roles) as Name[]) {
    const email = `${name}@saltmarsh.example`;
    const { id } = await inTransaction(context.sequelize, (tx) =>
      createPerson(tx, { name, email, passwordHash, roles: roles[name], by: 'set-up' }),
    );
    people[name] = { id, email };
  }
  await context.close();
  await stopThreads();
  return { environment, people };
}

/** @param flags for Node.js itself */
export function startService(
  service: 'web' | 'worker',
  environment: Record<string, string>,
  flags: readonly string[] = [],
): Promise<{ process: ChildProcess; url: string }> {
  return new Promise((resolve, reject) => {
    const child = spawn(process.execPath, [...flags, join(root, 'dist/server/main.js'), `--services=${service}`], {
      cwd: root,
      env: { ...process.env, ...environment, NODE_ENV: 'production' },
      stdio: ['ignore', 'inherit', 'inherit', 'ipc'],
      // A session of its own, as a service has and PostgreSQL too: Linux shares a busy machine out by sessions.
      detached: true,
    });
    child.once('message', (said: { type: string; url?: string; message?: string }) =>
      said.type === 'ready'
        ? resolve({ process: child, url: (said.url ?? '').replace('localhost', '127.0.0.1').replace(/\/$/, '') })
        : reject(new Error(said.message)),
    );
    child.once('exit', (code) => reject(new Error(`The ${service} ended with ${code}`)));
  });
}

export function endService(child: ChildProcess): Promise<void> {
  return new Promise((resolve) => {
    child.once('exit', () => resolve());
    child.kill('SIGTERM');
  });
}

/** Sends a file by the tus protocol to an upload that was begun. */
export async function uploadFile(url: string, path: string, visitor: Visitor): Promise<void> {
  const file = openSync(path, 'r');
  const buffer = Buffer.alloc(piece);
  for (let offset = 0; ;) {
    const count = readSync(file, buffer, 0, piece, offset);
    if (count === 0) break;
    const status = await patchUpload(url, offset, buffer.subarray(0, count), visitor.credentials());
    if (status !== 204) throw new Error(`The upload was answered with ${status}`);
    offset += count;
  }
  closeSync(file);
}

/** User and system time of a process so far (Linux's /proc, in hundredths of a second). */
export function cpuSeconds({ pid }: ChildProcess): number {
  const fields = readFileSync(`/proc/${pid}/stat`, 'utf8').split(') ')[1].split(' ');
  return (Number(fields[11]) + Number(fields[12])) / 100;
}
