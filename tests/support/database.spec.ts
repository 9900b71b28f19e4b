import { Client } from 'pg';
import { describe, expect, it } from 'vitest';
import { createTestDatabase } from './database';

async function asRole<T>(url: string, work: (client: Client) => Promise<T>): Promise<T> {
  const client = new Client({ connectionString: url });
  await client.connect();
  try {
    return await work(client);
  } finally {
    await client.end();
  }
}

describe('createTestDatabase', () => {
  it('gives databases of their own, migrated, in which the application owns nothing', async () => {
    const [one, other] = await Promise.all([createTestDatabase(), createTestDatabase()]);
    try {
      expect(one.name).not.toBe(other.name);
      for (const database of [one, other]) {
        const applied = await asRole(
          database.appUrl,
          async (client) => (await client.query('SELECT name FROM migrations')).rowCount,
        );
        expect(applied).toBeGreaterThan(0);
        const owned = await asRole(database.appUrl, async (client) => {
          const { rows } = await client.query<{ owned: number }>(
            'SELECT count(*)::int AS owned FROM pg_class WHERE pg_get_userbyid(relowner) = current_user',
          );
          return rows[0].owned;
        });
        expect(owned).toBe(0);
        await expect(asRole(database.appUrl, (client) => client.query('CREATE TABLE mine (a int)'))).rejects.toThrow(
          /permission denied/,
        );
      }
    } finally {
      await Promise.all([one.drop(), other.drop()]);
    }
    await expect(asRole(one.appUrl, (client) => client.query('SELECT 1'))).rejects.toThrow(/does not exist/);
  });
});
