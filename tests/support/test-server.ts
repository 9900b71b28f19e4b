import { randomBytes } from 'node:crypto';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { Client } from 'pg';
import { startPostgres } from '../../tools/postgres.mjs';

/** Addresses of the PostgreSQL server that tests use, in the roles that an installation has. */
export interface TestServer {
  readonly appUrl: string;
  readonly ownerUrl: string;
}

/** The server named by tools/test.mjs; without one, as when tests are run by hand, one in the folder for temporary files that stays up. */
export async function testServer(): Promise<TestServer> {
  const { TALLYSTONE_TEST_APP_URL: appUrl, TALLYSTONE_TEST_OWNER_URL: ownerUrl } = process.env;
  if (appUrl && ownerUrl) return { appUrl, ownerUrl };
  return startPostgres({ data: join(tmpdir(), `tallystone-tests-${process.getuid?.() ?? 0}`), test: true });
}

/** The same address with another database. */
export function inDatabase(url: string, name: string): string {
  const address = new URL(url);
  address.pathname = `/${name}`;
  return address.href;
}

/** A name that tells which process made the database, so that one whose process is gone can be dropped. */
export const databaseName = (): string => `test_${process.pid}_${randomBytes(5).toString('hex')}`;

/** For what outlives the process that makes it: nobody drops it but whoever takes it over. */
export const groundName = (): string => `ground_${randomBytes(5).toString('hex')}`;

/** Runs work on a connection of the owner to the server's maintenance database. */
export async function asOwner<T>(server: TestServer, work: (client: Client) => Promise<T>): Promise<T> {
  const client = new Client({ connectionString: server.ownerUrl });
  await client.connect();
  try {
    return await work(client);
  } finally {
    await client.end();
  }
}

const DROP_TRIES = 50;

/**
 * Ends what is still connected to a database and drops it. A session that has not yet said who it is may be ended by superusers alone (PostgreSQL 15,
 * TerminateOtherDBBackends): a moment later it has, or is gone.
 */
export async function dropDatabase(server: TestServer, name: string): Promise<void> {
  await asOwner(server, async (client) => {
    for (let tries = 1; ; tries++) {
      try {
        await client.query(`DROP DATABASE IF EXISTS "${name}" WITH (FORCE)`);
        return;
      } catch (cause) {
        if (tries === DROP_TRIES || (cause as { code?: string }).code !== '42501') throw cause;
        await new Promise((resolve) => setTimeout(resolve, 100));
      }
    }
  });
}
