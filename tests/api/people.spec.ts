import { readFile, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { Pool } from 'pg';
import { SMTPServer } from 'smtp-server';
import supertest from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { ensureSetUpToken } from '../../server/src/services/set-up/set-up';
import { IntakeServer, Visitor, testPassword } from '../support/intake';

let server: IntakeServer;
let admin: Visitor;
let owner: Pool;
const letters: string[] = [];
let mail: SMTPServer;

beforeAll(async () => {
  mail = new SMTPServer({
    authOptional: true,
    disabledCommands: ['STARTTLS', 'AUTH'],
    onData(stream, _session, done) {
      const parts: Buffer[] = [];
      stream.on('data', (part: Buffer) => parts.push(part));
      stream.on('end', () => (letters.push(Buffer.concat(parts).toString('utf8')), done()));
    },
  });
  await new Promise<void>((resolve) => mail.listen(0, '127.0.0.1', resolve));
  const { port } = mail.server.address() as { port: number };
  server = await IntakeServer.start({ environment: { MAIL_HOST: '127.0.0.1', MAIL_PORT: String(port) } });
  owner = new Pool({ connectionString: server.database.ownerUrl });
});
afterAll(async () => {
  await owner.end();
  await server.stop();
  await new Promise<void>((resolve) => mail.close(() => resolve()));
});

const waitFor = async <T>(look: () => Promise<T | undefined> | T | undefined): Promise<T> => {
  const end = Date.now() + 20_000;
  for (;;) {
    const found = await look();
    if (found !== undefined) return found;
    if (Date.now() > end) throw new Error('It did not happen');
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
};

/** A browser in front of a page for strangers. */
async function stranger(): Promise<(path: string, body: object) => supertest.Test> {
  const agent = supertest.agent(server.url);
  const { headers } = await agent.get('/api/session').expect(200);
  const token = /XSRF-TOKEN=([^;]*)/.exec((headers['set-cookie'] as unknown as string[]).join())![1];
  return (path, body) => agent.post(path).set('X-XSRF-TOKEN', token).send(body);
}

describe('the first admin', () => {
  const details = { name: 'Adrian First', email: 'adrian@saltmarsh.example', password: testPassword };

  it('is made once, with the token that the server keeps in a file for its own account', async () => {
    const token = (await ensureSetUpToken(server.context))!;
    const file = join(server.folder.path, 'set-up-token');
    expect((await readFile(file, 'utf8')).trim()).toBe(token);
    expect((await stat(file)).mode & 0o777).toBe(0o600);
    // A restart keeps it.
    expect(await ensureSetUpToken(server.context)).toBe(token);
    const post = await stranger();
    expect((await supertest(server.url).get('/api/set-up').expect(200)).body).toEqual({ open: true });
    await post('/api/set-up', { ...details, token: 'x'.repeat(43) }).expect(403);
    await post('/api/set-up', { ...details, token, roles: ['admin', 'modeller'] }).expect(422);
    // Two at once: one is made.
    const both = await Promise.all([
      post('/api/set-up', { ...details, token }),
      post('/api/set-up', { ...details, email: 'second@saltmarsh.example', token }),
    ]);
    expect(both.map(({ status }) => status).sort()).toEqual([201, 409]);
    expect((await supertest(server.url).get('/api/set-up').expect(200)).body).toEqual({ open: false });
    expect(await ensureSetUpToken(server.context)).toBeNull();
    await expect(stat(file)).rejects.toThrow('ENOENT');
    const made = both.find(({ status }) => status === 201)!.body.email as string;
    admin = new Visitor(supertest.agent(server.url), '');
    await admin.enter(made);
    expect((await admin.get('/api/session')).body.user.roles).toEqual(['admin']);
  });
});

describe('an invitation', () => {
  it('goes out by mail, is looked up, accepted once and signs in with the roles the admin chose', async () => {
    const asked = { name: 'Nadia New', email: 'Nadia@Saltmarsh.example', roles: ['modeller', 'validator'] };
    const { body } = await admin.post('/api/invitations').send(asked).expect(201);
    expect(body).toMatchObject({
      email: 'nadia@saltmarsh.example',
      state: 'open',
      mail: 'waiting',
      roles: ['modeller', 'validator'],
    });
    const letter = await waitFor(() => letters.find((text) => text.includes('To: nadia@saltmarsh.example')));
    const token = /invitation\/([\w-]{43})/.exec(letter.replaceAll('=\r\n', ''))![1];
    await waitFor(async () => ((await admin.get('/api/invitations')).body.invitations[0].mail === 'sent' ? true : undefined));
    // Neither the link nor its token stays in the database.
    const { rows } = await owner.query('SELECT m.body, i.token_hash FROM mail_outbox m JOIN invitations i ON i.mail_id = m.id');
    expect(rows).toEqual([{ body: null, token_hash: expect.any(Buffer) }]);
    expect(JSON.stringify((await owner.query('SELECT * FROM record')).rows)).not.toContain(token);

    const post = await stranger();
    expect((await post('/api/invitations/look-up', { token }).expect(200)).body).toMatchObject({
      name: 'Nadia New',
      email: 'nadia@saltmarsh.example',
    });
    const blocked = await post('/api/invitations/accept', { token, name: 'Nadia', password: 'nadia-saltmarsh-2024' }).expect(422);
    expect(blocked.body.problems[0].code).toBe('password-blocked');
    // What the invitation does not give cannot be taken.
    await post('/api/invitations/accept', { token, name: 'Nadia', password: testPassword, roles: ['admin'] }).expect(422);
    const both = await Promise.all(
      [1, 2].map(() => post('/api/invitations/accept', { token, name: 'Nadia Newcomer', password: testPassword })),
    );
    expect(both.map(({ status }) => status).sort()).toEqual([201, 404]);
    const nadia = new Visitor(supertest.agent(server.url), '');
    await nadia.enter('nadia@saltmarsh.example');
    expect((await nadia.get('/api/session')).body.user).toMatchObject({
      name: 'Nadia Newcomer',
      roles: ['modeller', 'validator'],
    });
    await post('/api/invitations/look-up', { token }).expect(404);
  });

  it('is not sent twice to one address, and can be withdrawn', async () => {
    const asked = { name: 'Ivo', email: 'ivo@saltmarsh.example', roles: ['auditor'] };
    const { body } = await admin.post('/api/invitations').send(asked).expect(201);
    expect((await admin.post('/api/invitations').send(asked).expect(409)).body.code).toBe('already-invited');
    expect((await admin.delete(`/api/invitations/${body.id}`).expect(200)).body.state).toBe('withdrawn');
    await admin.delete(`/api/invitations/${body.id}`).expect(409);
    await admin.post('/api/invitations').send(asked).expect(201);
    expect(
      (
        await admin
          .post('/api/invitations')
          .send({ ...asked, email: 'nadia@saltmarsh.example' })
          .expect(409)
      ).body.code,
    ).toBe('email-taken');
  });

  it('runs out by the database’s clock', async () => {
    await admin.post('/api/invitations').send({ name: 'Late', email: 'late@saltmarsh.example', roles: [] }).expect(201);
    const letter = await waitFor(() => letters.find((text) => text.includes('To: late@saltmarsh.example')));
    const token = /invitation\/([\w-]{43})/.exec(letter.replaceAll('=\r\n', ''))![1];
    await owner.query(`UPDATE invitations SET expires_at = now() - interval '1 second' WHERE email = 'late@saltmarsh.example'`);
    const post = await stranger();
    await post('/api/invitations/accept', { token, name: 'Late', password: testPassword }).expect(404);
  });
});

describe('roles', () => {
  it('change under the entity tag, with a reason, and end the sessions of that person at once', async () => {
    const worker = await server.signIn('wim', 'modeller');
    const path = `/api/people/${worker.personId}`;
    const read = await admin.get(path).expect(200);
    expect(read.body).toMatchObject({
      roles: ['modeller'],
      state: 'active',
      revision: 1,
      abilities: ['change-roles', 'disable'],
    });
    const change = (tag: string | null, body: object): supertest.Test => {
      const request = admin.put(`${path}/roles`);
      return (tag === null ? request : request.set('If-Match', tag)).send(body);
    };
    await change(null, { roles: ['auditor'], reason: 'moved' }).expect(428);
    await change('"7"', { roles: ['auditor'], reason: 'moved' }).expect(412);
    const problems = (
      await change(read.headers.etag, { roles: ['auditor', 'auditor', 'king'], reason: ' ', extra: 1 }).expect(422)
    ).body.problems;
    expect(problems.map(({ where }: { where: { field: string } }) => where.field).sort()).toEqual(['extra', 'reason', 'roles.2']);
    const changed = await change(read.headers.etag, { roles: ['auditor', 'compliance'], reason: 'moved to audit' }).expect(200);
    expect(changed.body).toMatchObject({ roles: ['auditor', 'compliance'], revision: 2 });
    expect(changed.headers.etag).toBe('"2"');
    await worker.get('/api/sessions').expect(401);
    const { rows } = await owner.query(
      `SELECT actor_name, before, after, reason FROM record WHERE action = 'person.roles-changed'`,
    );
    expect(rows).toEqual([
      expect.objectContaining({
        before: { roles: ['modeller'] },
        after: { roles: ['auditor', 'compliance'] },
        reason: 'moved to audit',
      }),
    ]);
  });

  it('of oneself are out of reach, whichever way', async () => {
    const me = (await admin.get('/api/session')).body.user.id as string;
    const { headers } = await admin.get(`/api/people/${me}`).expect(200);
    const refused = await admin
      .put(`/api/people/${me}/roles`)
      .set('If-Match', headers.etag)
      .send({ roles: ['admin', 'validator'], reason: 'handy' })
      .expect(403);
    expect(refused.body.detail).toContain('their own roles');
    await admin.post(`/api/people/${me}/disable`).send({ reason: 'away' }).expect(403);
    expect((await admin.get('/api/session')).body.user.roles).toEqual(['admin']);
  });

  it('never leave the product without an admin, also when two admins demote each other at once', async () => {
    const one = await server.signIn('arno', 'admin');
    const two = await server.signIn('arva', 'admin');
    const me = (await admin.get('/api/session')).body.user.id as string;
    const demote = async (by: Visitor, whom: string): Promise<number> => {
      const { headers, status } = await by.get(`/api/people/${whom}`);
      if (status !== 200) return status;
      return (await by.put(`/api/people/${whom}/roles`).set('If-Match', headers.etag).send({ roles: [], reason: 'test' })).status;
    };
    expect(await demote(one, me)).toBe(200);
    const statuses = await Promise.all([demote(one, two.personId), demote(two, one.personId)]);
    expect(statuses).toContain(200);
    const { rows } = await owner.query(
      `SELECT count(*)::int AS admins FROM person_roles r JOIN people p ON p.id = r.person_id WHERE role = 'admin' AND state = 'active'`,
    );
    expect(rows[0].admins).toBe(1);
    const left = (await one.get('/api/sessions')).status === 200 ? one : two;
    admin = left;
  });
});

describe('a disabled account', () => {
  it('has no session from that moment and gets none until it is enabled', async () => {
    const visitor = await server.signIn('dora', 'modeller');
    await visitor.get('/api/models').expect(200);
    await admin.post(`/api/people/${visitor.personId}/disable`).send({ reason: 'left the company' }).expect(200);
    await visitor.get('/api/models').expect(401);
    await admin.post(`/api/people/${visitor.personId}/disable`).send({ reason: 'again' }).expect(409);
    await expect(visitor.enter('dora@saltmarsh.example')).rejects.toThrow('401');
    await admin.post(`/api/people/${visitor.personId}/enable`).send({ reason: 'came back' }).expect(200);
    await visitor.enter('dora@saltmarsh.example');
    await visitor.get('/api/models').expect(200);
  });
});
