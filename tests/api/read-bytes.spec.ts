import { randomBytes, randomUUID } from 'node:crypto';
import { Sequelize } from 'sequelize';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { readBytes } from '../../server/src/database/read-bytes';
import { rows } from '../../server/src/database/sql';
import { type TestDatabase, createTestDatabase } from '../support/database';

describe('bytes of the database', () => {
  let database: TestDatabase;
  let sequelize: Sequelize;
  beforeAll(async () => {
    database = await createTestDatabase();
    sequelize = new Sequelize(database.ownerUrl, { dialect: 'postgres', logging: false, pool: { max: 2 } });
    await sequelize.query('CREATE TABLE kept (id uuid, place integer, content bytea)');
  });
  afterAll(async () => {
    await sequelize.close();
    await database.drop();
  });
  const select = 'SELECT content FROM kept WHERE id = $1 AND place >= $2 ORDER BY place';

  it('come as they went, of any length, in order, each in memory of its own', async () => {
    const id = randomUUID();
    const contents = [0, 1, 255, 70_000, 3_000_000].map((length) => randomBytes(length));
    for (const [place, content] of contents.entries())
      await sequelize.query('INSERT INTO kept VALUES ($1, $2, $3)', { bind: [id, place, content] });
    const all = await readBytes(sequelize, { text: select, values: [id, 0] });
    expect(all.map((bytes, place) => Buffer.compare(bytes, contents[place]))).toEqual([0, 0, 0, 0, 0]);
    // Memory of their own, in which little else lies: it is handed to threads.
    expect(new Set(all.map(({ buffer }) => buffer)).size).toBe(contents.length);
    for (const { buffer, byteLength } of all) expect(buffer.byteLength - byteLength).toBeLessThan(64);
    expect(await readBytes(sequelize, { text: select, values: [id, 4] })).toHaveLength(1);
    expect(await readBytes(sequelize, { text: select, values: [randomUUID(), 0] })).toEqual([]);
  });

  it('take no parameter that could be anything but a uuid or a whole number', async () => {
    for (const value of ["' OR true --", '1', 1.5, Number.NaN])
      await expect(readBytes(sequelize, { text: select, values: [value, 0] })).rejects.toThrow('whole number');
  });

  it('fail with the SQLSTATE, and the next question is answered', async () => {
    await expect(readBytes(sequelize, { text: 'SELECT content FROM lost', values: [] })).rejects.toMatchObject({ code: '42P01' });
    await expect(readBytes(sequelize, { text: 'SELECT NULL::bytea', values: [] })).rejects.toThrow('nulls');
    for (let time = 0; time < 4; time++)
      await expect(readBytes(sequelize, { text: 'SELECT 1/0 FROM kept', values: [] })).rejects.toMatchObject({ code: '22012' });
    expect(await rows(sequelize, 'SELECT 1 AS one')).toEqual([{ one: 1 }]);
  });
});
