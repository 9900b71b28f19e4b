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

/** Ends what is still connected to a database and drops it. */
export const dropDatabase = (server: TestServer, name: string): Promise<unknown> =>
  asOwner(server, (client) => client.query(`DROP DATABASE IF EXISTS "${name}" WITH (FORCE)`));
