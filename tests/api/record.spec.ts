import { execFile } from 'node:child_process';
import { Pool } from 'pg';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { inTransaction } from '../../server/src/database/transaction';
import { appendRecord, nobody } from '../../server/src/services/record/append';
import { recordHead, verifyChain } from '../../server/src/services/record/verify';
import { builtPath } from '../support/built-server';
import { IntakeServer, type Visitor } from '../support/intake';

let server: IntakeServer;
let owner: Pool;
let marian: Visitor;
let other: Visitor;
let auditor: Visitor;
let admin: Visitor;
let modelId: string;

beforeAll(async () => {
  server = await IntakeServer.start();
  owner = new Pool({ connectionString: server.database.ownerUrl });
  marian = await server.signIn('marian', 'modeller');
  other = await server.signIn('oswin', 'modeller');
  auditor = await server.signIn('otto', 'auditor');
  admin = await server.signIn('ada', 'admin');
  modelId = await marian.model();
});
afterAll(async () => {
  await owner.end();
  await server.stop();
});

const append = (name: string): Promise<{ sequence: number; hash: string }> =>
  inTransaction(server.context.sequelize, (tx) =>
    appendRecord(tx, {
      actor: nobody(name),
      action: 'session.signed-out',
      entity: 'session',
      entityId: null,
      detail: { address: null },
    }),
  );

describe('the record of actions', () => {
  it('cannot be changed, emptied or dropped by the application', async () => {
    const app = server.context.pool;
    for (const statement of [
      `UPDATE record SET reason = 'other'`,
      'DELETE FROM record',
      'TRUNCATE record',
      'DROP TABLE record',
      'ALTER TABLE record ADD COLUMN x int',
      'CREATE TABLE mine (x int)',
      'ALTER TABLE record DISABLE TRIGGER ALL',
    ]) {
      await expect(app.query(statement), statement).rejects.toMatchObject({ code: '42501' });
    }
    const { rows } = await owner.query(`SELECT count(*)::int AS owned FROM pg_tables WHERE tableowner = 'tallystone_app'`);
    expect(rows[0].owned).toBe(0);
  });

  it('is written in the transaction of the change: both or neither', async () => {
    const before = await recordHead(server.context.pool);
    await expect(
      inTransaction(server.context.sequelize, async (tx) => {
        await appendRecord(tx, {
          actor: nobody('x'),
          action: 'session.signed-out',
          entity: 'session',
          entityId: null,
          detail: { address: null },
        });
        throw new Error('changed my mind');
      }),
    ).rejects.toThrow('changed my mind');
    expect(await recordHead(server.context.pool)).toEqual(before);
  });

  it('takes only acts that are declared, with the fields that are declared', async () => {
    const wrong = {
      actor: nobody('x'),
      action: 'session.signed-out',
      entity: 'session',
      entityId: null,
      detail: { address: null, applicant: 'row 7' },
    };
    await expect(inTransaction(server.context.sequelize, (tx) => appendRecord(tx, wrong as never))).rejects.toThrow('applicant');
  });

  it('keeps one chain when many append at once', async () => {
    const made = await Promise.all(Array.from({ length: 40 }, (_, k) => append(`writer ${k}`)));
    const sequences = made.map(({ sequence }) => sequence).sort((a, b) => a - b);
    expect(sequences.at(-1)! - sequences[0]).toBe(39);
    expect(await verifyChain(server.context.pool)).toMatchObject({ intact: true, faults: [] });
  });
});

describe('who reads what', () => {
  it('an auditor everything, a modeller their own models, an admin everything but what it says of models', async () => {
    const all = (await auditor.get('/api/record?limit=200').expect(200)).body.entries;
    expect(all.some((entry: { action: string }) => entry.action === 'session.signed-in')).toBe(true);
    const created = all.find((entry: { modelId: string | null }) => entry.modelId === modelId);
    expect(created).toMatchObject({ withheld: false, actorName: 'marian' });

    const own = (await marian.get('/api/record').expect(200)).body.entries;
    expect(own.length).toBeGreaterThan(0);
    expect(own.every((entry: { modelId: string }) => entry.modelId === modelId)).toBe(true);
    expect((await other.get('/api/record').expect(200)).body.entries).toEqual([]);

    const outline = (await admin.get('/api/record?limit=200').expect(200)).body.entries;
    const withheld = outline.find((entry: { modelId: string | null }) => entry.modelId === modelId);
    expect(withheld).toMatchObject({ withheld: true, before: null, after: null, detail: null, action: created.action });
    expect(outline.find((entry: { action: string }) => entry.action === 'person.created')).toMatchObject({ withheld: false });
  });

  it('in pages that neither skip nor repeat, by filter', async () => {
    const seen: number[] = [];
    let before = '';
    do {
      const { body } = await auditor.get(`/api/record?limit=7${before}`).expect(200);
      seen.push(...body.entries.map((entry: { sequence: number }) => entry.sequence));
      before = body.next === null ? '' : `&before=${body.next}`;
    } while (before !== '');
    const { rows } = await owner.query('SELECT count(*)::int AS count FROM record');
    expect(seen).toHaveLength(rows[0].count);
    expect(new Set(seen).size).toBe(seen.length);
    const filtered = (await auditor.get(`/api/record?action=session.signed-in&actorId=${marian.personId}`).expect(200)).body
      .entries;
    expect(filtered.map((entry: { actorName: string }) => entry.actorName)).toEqual(['marian']);
    await auditor.get('/api/record?limit=7&colour=blue').expect(422);
  });
});

describe('verification', () => {
  it('as a run ends with the head, and is itself recorded', async () => {
    const { body } = await auditor.post('/api/record/verifications').send({}).expect(202);
    const run = await auditor.ended(body.id);
    expect(run).toMatchObject({ state: 'succeeded', result: { intact: true, faultCount: 0 } });
    const { entries } = (await auditor.get('/api/record?action=record.verified').expect(200)).body;
    expect(entries[0]).toMatchObject({ actorName: 'otto', detail: { intact: true } });
  });

  /** Lets the owner tamper, looks, and puts everything back. */
  async function tampered(
    statements: string[],
    heads: { sequence: number; hash: string }[] = [],
  ): Promise<{ kind: string; sequence: number }[]> {
    await owner.query('CREATE TABLE kept AS SELECT * FROM record');
    try {
      for (const statement of statements) await owner.query(statement);
      const found = await verifyChain(server.context.pool, { heads });
      expect(found.intact).toBe(found.faultCount === 0);
      return found.faults.map(({ kind, sequence }) => ({ kind, sequence }));
    } finally {
      await owner.query('DELETE FROM record');
      await owner.query('INSERT INTO record SELECT * FROM kept');
      await owner.query('DROP TABLE kept');
    }
  }

  it('finds a row that was altered, in each of its columns', async () => {
    for (const change of [
      `at = at + interval '1 millisecond'`, `actor_name = 'someone else'`, `actor_roles = '{admin}'`, `action = 'session.ended'`, `entity = 'x'`, `entity_id = 'x'`,
      `model_id = gen_random_uuid()`, `before = '{"a":1}'`, `after = '[]'`, `detail = '{"address":"1.2.3.4"}'`, `reason = 'because'`, 'actor_id = gen_random_uuid()',
    ]) {
      expect(await tampered([`UPDATE record SET ${change} WHERE sequence = 5`]), change).toEqual([{ kind: 'altered', sequence: 5 }]);
    } // prettier-ignore
  });

  it('finds a row that was dropped, and rows that changed places', async () => {
    expect(await tampered(['DELETE FROM record WHERE sequence = 6'])).toEqual([{ kind: 'dropped', sequence: 6 }]);
    // Dropped and the rest moved up to close the gap.
    const closed = await tampered([
      'DELETE FROM record WHERE sequence = 6',
      'UPDATE record SET sequence = sequence + 1000000 WHERE sequence > 6',
      'UPDATE record SET sequence = sequence - 1000001 WHERE sequence > 1000000',
    ]);
    expect(closed).toContainEqual({ kind: 'reordered', sequence: 6 });
    const swapped = await tampered([
      'UPDATE record SET sequence = 999999 WHERE sequence = 4',
      'UPDATE record SET sequence = 4 WHERE sequence = 5',
      'UPDATE record SET sequence = 5 WHERE sequence = 999999',
    ]);
    expect(swapped).toContainEqual({ kind: 'reordered', sequence: 4 });
  });

  it('finds a tail that was cut, by a head that was noted', async () => {
    const head = await recordHead(server.context.pool);
    const cut = [`DELETE FROM record WHERE sequence > ${head.sequence - 3}`];
    expect(await tampered(cut)).toEqual([]);
    expect(await tampered(cut, [head])).toEqual([{ kind: 'cut', sequence: head.sequence }]);
    expect(await tampered([], [head])).toEqual([]);
  });

  it('from the command line exits 0 on an intact chain and 2, naming the rows, on another', async () => {
    const run = (...args: string[]): Promise<{ code: number; out: string; err: string }> =>
      new Promise((resolve) =>
        execFile(
          process.execPath,
          [builtPath('cli/verify-record'), ...args],
          { env: { ...process.env, DATABASE_URL: server.database.appUrl } },
          (error, out, err) => resolve({ code: typeof error?.code === 'number' ? error.code : 0, out, err }),
        ),
      );
    const { sequence, hash } = await recordHead(server.context.pool);
    const good = await run('--head', `${sequence}:${hash}`);
    expect(good).toMatchObject({ code: 0, err: '' });
    expect(good.out).toContain(`the chain is intact; head ${sequence}:${hash}`);
    await owner.query(`UPDATE record SET actor_name = 'someone else' WHERE sequence = 3`);
    const bad = await run();
    expect(bad.code).toBe(2);
    expect(bad.err).toContain('altered: Entry 3 does not match its hash');
  });
});
