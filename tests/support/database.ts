import { createHash } from 'node:crypto';
import { readFileSync, readdirSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { Client } from 'pg';
import { migrate } from '../../server/src/migrations/migrate';
import { type TestServer, asOwner, databaseName, dropDatabase, inDatabase, testServer } from './test-server';

/** A database of a test file's own: migrated as the owner, to be used as the application. */
export interface TestDatabase {
  readonly name: string;
  /** Signed in as `tallystone_app`, which owns nothing. */
  readonly appUrl: string;
  /** Signed in as `tallystone_owner`, for what the application may not do itself. */
  readonly ownerUrl: string;
  /** Ends what is still connected and drops it. */
  drop(): Promise<void>;
}

const root = fileURLToPath(new URL('../..', import.meta.url));
const turn = 7_415_900;
const templatesKept = 4;

/** Changes whenever a migration does: a template made from other migrations is not used. */
function migrationsStamp(): string {
  const hash = createHash('sha256').update(readFileSync(join(root, 'package-lock.json')));
  for (const folder of ['server/src/migrations', 'server/src/jobs']) {
    const files = readdirSync(join(root, folder), { recursive: true, encoding: 'utf8' });
    for (const file of files.filter((name) => name.endsWith('.ts') && !name.endsWith('.spec.ts')).sort()) {
      hash.update(file).update(readFileSync(join(root, folder, file)));
    }
  }
  return hash.digest('hex').slice(0, 12);
}

function isAlive(pid: number): boolean {
  try {
    process.kill(pid, 0);
    return true;
  } catch (error) {
    return (error as NodeJS.ErrnoException).code === 'EPERM';
  }
}

/** Drops the databases of test processes that ended without doing so, and all but the newest templates. */
async function sweep(client: Client, template: string): Promise<void> {
  const { rows } = await client.query<{ name: string }>(
    `SELECT datname AS name FROM pg_database WHERE datname ~ '^(test_[0-9]+_|template_)' AND datname <> $1 ORDER BY oid DESC`,
    [template],
  );
  const left = rows.filter(({ name }) => name.startsWith('test_') && !isAlive(Number(name.split('_')[1])));
  const outdated = rows.filter(({ name }) => name.startsWith('template_')).slice(templatesKept);
  for (const { name } of [...left, ...outdated]) await client.query(`DROP DATABASE IF EXISTS "${name}" WITH (FORCE)`);
}

async function makeTemplate(client: Client, server: TestServer, template: string): Promise<void> {
  const there = await client.query('SELECT 1 FROM pg_database WHERE datname = $1', [template]);
  if (there.rowCount) return;
  // Migrated under another name first: a template that a failing migration left half-made must not be taken for a whole one.
  const half = `half_${template}`;
  await client.query(`DROP DATABASE IF EXISTS "${half}" WITH (FORCE)`);
  await client.query(`CREATE DATABASE "${half}"`);
  await migrate(inDatabase(server.ownerUrl, half), inDatabase(server.appUrl, half));
  await client.query(`ALTER DATABASE "${half}" RENAME TO "${template}"`);
}

/**
 * A fresh, migrated database on the test server, copied from a template that is migrated once.
 *
 * @example
 * let database: TestDatabase;
 * beforeAll(async () => { database = await createTestDatabase(); });
 * afterAll(() => database.drop());
 */
export async function createTestDatabase(): Promise<TestDatabase> {
  const server = await testServer();
  const template = `template_${migrationsStamp()}`;
  const name = databaseName();
  await asOwner(server, async (client) => {
    // Copies cannot run beside each other: the template must have no other session.
    await client.query('SELECT pg_advisory_lock($1)', [turn]);
    await sweep(client, template);
    await makeTemplate(client, server, template);
    await client.query(`CREATE DATABASE "${name}" TEMPLATE "${template}"`);
  });
  return {
    name,
    appUrl: inDatabase(server.appUrl, name),
    ownerUrl: inDatabase(server.ownerUrl, name),
    drop: () => dropDatabase(server, name),
  };
}
