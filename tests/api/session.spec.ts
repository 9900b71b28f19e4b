import { Pool } from 'pg';
import supertest from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { IntakeServer, Visitor, testPassword } from '../support/intake';

let server: IntakeServer;
let marian: Visitor;
let owner: Pool;

beforeAll(async () => {
  server = await IntakeServer.start({ worker: false });
  owner = new Pool({ connectionString: server.database.ownerUrl });
  marian = await server.signIn('marian', 'modeller');
});
afterAll(async () => {
  await owner.end();
  await server.stop();
});

/** A browser in front of the sign-in page: cookies, and the token that goes with them. */
async function stranger(): Promise<{
  agent: ReturnType<typeof supertest.agent>;
  token: () => string;
  signIn: (email: string, password: string) => supertest.Test;
}> {
  const agent = supertest.agent(server.url);
  let token = tokenOf(await agent.get('/api/session').expect(200));
  return {
    agent,
    token: () => token,
    signIn: (email, password) =>
      agent
        .post('/api/session')
        .set('X-XSRF-TOKEN', token)
        .send({ email, password })
        .on('response', (response: supertest.Response) => (token = tokenOf(response) || token)),
  };
}

function tokenOf(response: supertest.Response): string {
  const cookies = (response.headers['set-cookie'] as unknown as string[] | undefined) ?? [];
  return cookies.map((cookie) => /^XSRF-TOKEN=([^;]*)/.exec(cookie)?.[1]).find((found) => found !== undefined) ?? '';
}

const record = async (action: string): Promise<Record<string, unknown>[]> => {
  const { rows } = await server.context.pool.query('SELECT * FROM record WHERE action = $1 ORDER BY sequence', [action]);
  return rows as Record<string, unknown>[];
};

describe('sign-in', () => {
  it('says who is signed in and what they may do, and null when nobody is', async () => {
    const { agent } = await stranger();
    expect((await agent.get('/api/session').expect(200)).body).toEqual({ user: null, abilities: [], demo: false });
    const { body } = await marian.get('/api/session').expect(200);
    expect(body.user).toMatchObject({ name: 'marian', email: 'marian@saltmarsh.example', roles: ['modeller'] });
    expect(body.abilities).toEqual(['record.read', 'models.read', 'models.create', 'models.read-content', 'reviews.read', 'documents.read']);
  });

  it('changes the session id, so that one planted before is worth nothing', async () => {
    const visitor = await stranger();
    const first = await visitor.signIn('marian@saltmarsh.example', testPassword).expect(200);
    const second = await visitor.signIn('marian@saltmarsh.example', testPassword).expect(200);
    const id = (response: supertest.Response): string =>
      (response.headers['set-cookie'] as unknown as string[]).find((cookie) => cookie.startsWith('tallystone='))!;
    expect(id(first)).not.toBe(id(second));
    expect(id(first)).toMatch(/HttpOnly; SameSite=Lax$/);
    const old = id(first).split(';')[0];
    expect((await supertest(server.url).get('/api/session').set('Cookie', old)).body.user).toBeNull();
  });

  it('answers a wrong password, an unknown address and a disabled account alike', async () => {
    const gone = await server.signIn('gone', 'modeller');
    await server.context.pool.query(`UPDATE people SET state = 'disabled' WHERE id = $1`, [gone.personId]);
    const visitor = await stranger();
    const answers = [
      await visitor.signIn('marian@saltmarsh.example', 'not the password at all').expect(401),
      await visitor.signIn('nobody@saltmarsh.example', 'not the password at all').expect(401),
      await visitor.signIn('gone@saltmarsh.example', testPassword).expect(401),
    ].map(({ body }) => ({ ...body, requestId: null }));
    expect(answers[1]).toEqual(answers[0]);
    expect(answers[2]).toEqual(answers[0]);
    const causes = (await record('session.sign-in-failed')).map((row) => row['detail']);
    expect(causes).toContainEqual({ address: expect.any(String), email: null, cause: 'wrong' });
    expect(causes).toContainEqual({ address: expect.any(String), email: 'gone@saltmarsh.example', cause: 'disabled' });
    // The address of a stranger is not written down: it may be a password in the wrong field.
    expect(JSON.stringify(causes)).not.toContain('nobody@');
  });

  it('takes as long for an unknown address as for a known one', async () => {
    const visitor = await stranger();
    const time = async (email: string): Promise<number> => {
      const begun = performance.now();
      await visitor.signIn(email, 'not the password at all').expect(401);
      return performance.now() - begun;
    };
    const known = Math.min(await time('marian@saltmarsh.example'), await time('marian@saltmarsh.example'));
    const unknown = Math.min(await time('ghost@saltmarsh.example'), await time('ghost@saltmarsh.example'));
    // bcrypt dominates both; without it an unknown address would be answered in a few milliseconds.
    expect(unknown).toBeGreaterThan(known * 0.5);
    await server.context.pool.query('DELETE FROM sign_in_failures');
  });

  it('does not stall other requests while passwords are hashed', async () => {
    const visitor = await stranger();
    const hashing = Promise.all(
      [1, 2].map(() => visitor.signIn('ghost@saltmarsh.example', 'not the password at all').then(() => undefined)),
    );
    let worst = 0;
    for (let k = 0; k < 10; k++) {
      const begun = performance.now();
      await supertest(server.url).get('/health/live').expect(200);
      worst = Math.max(worst, performance.now() - begun);
    }
    await hashing;
    await server.context.pool.query('DELETE FROM sign_in_failures');
    // bcrypt on the event loop would hold a request up for its whole half second.
    expect(worst).toBeLessThan(400);
  });

  it('refuses after ten failures, also ten at once, and says when to try again', async () => {
    await server.signIn('tested', 'auditor');
    await server.context.pool.query('DELETE FROM sign_in_failures');
    const visitor = await stranger();
    const answers = await Promise.all(
      Array.from({ length: 14 }, () =>
        visitor.signIn('tested@saltmarsh.example', 'not the password at all').then(({ status }) => status),
      ),
    );
    expect(answers.filter((status) => status === 401)).toHaveLength(10);
    expect(answers.filter((status) => status === 429)).toHaveLength(4);
    const refused = await visitor.signIn('tested@saltmarsh.example', testPassword).expect(429);
    expect(Number(refused.headers['retry-after'])).toBeGreaterThan(800);
    expect(Number(refused.headers['retry-after'])).toBeLessThanOrEqual(900);
    // Another account from the same address still gets in.
    await visitor.signIn('marian@saltmarsh.example', testPassword).expect(200);
    const throttled = (await record('session.sign-in-failed')).filter(
      (row) => (row['detail'] as { cause: string }).cause === 'throttled',
    );
    expect(throttled).toHaveLength(1);
    // Fifteen minutes later, by the database's clock.
    await owner.query(`UPDATE sign_in_failures SET at = at - interval '16 minutes'`);
    await visitor.signIn('tested@saltmarsh.example', testPassword).expect(200);
  });
});

describe('requests from elsewhere', () => {
  it('refuses a change without the token, with another session’s token and with a token of before sign-in', async () => {
    const other = await server.signIn('oswin', 'modeller');
    await marian.agent.delete('/api/session').expect(403);
    const foreign = tokenOf(await other.get('/api/session'));
    const refused = await marian.agent.delete('/api/session').set('X-XSRF-TOKEN', foreign).expect(403);
    expect(refused.body.code).toBe('cross-site');
    // Planted together with a cookie of the attacker's choice it is still not this session's.
    const planted = supertest(server.url)
      .delete('/api/session')
      .set('Cookie', `${await cookieOf(marian)}; XSRF-TOKEN=${foreign}`);
    await planted.set('X-XSRF-TOKEN', foreign).expect(403);
    expect((await marian.get('/api/session')).body.user.name).toBe('marian');
  });

  it('refuses another origin and another site even with the right token', async () => {
    await marian.post('/api/record/verifications').set('Origin', 'https://elsewhere.example').expect(403);
    await marian.post('/api/record/verifications').set('Sec-Fetch-Site', 'cross-site').expect(403);
    // The refusal that a modeller gets for the act itself.
    const own = await marian.post('/api/record/verifications').set('Sec-Fetch-Site', 'same-origin').expect(403);
    expect(own.body.code).toBe('forbidden');
  });

  it('refuses a sign-in without a token', async () => {
    await supertest(server.url)
      .post('/api/session')
      .send({ email: 'marian@saltmarsh.example', password: testPassword })
      .expect(403);
  });
});

async function cookieOf(visitor: Visitor): Promise<string> {
  const request = visitor.get('/api/session');
  await request;
  return String(
    (request as unknown as { getHeader(name: string): string }).getHeader?.('cookie') ??
      (request as unknown as { cookies: string }).cookies,
  )
    .split('; ')
    .find((cookie) => cookie.startsWith('tallystone='))!;
}

describe('sessions', () => {
  it('are listed for their person, and ended one by one', async () => {
    const here = await server.signIn('petra', 'modeller');
    const there = new Visitor(supertest.agent(server.url), here.personId);
    await there.enter('petra@saltmarsh.example');
    const { sessions } = (await here.get('/api/sessions').expect(200)).body;
    expect(sessions).toHaveLength(2);
    const other = sessions.find((session: { current: boolean }) => !session.current);
    // Another person cannot end it.
    await marian.delete(`/api/sessions/${other.id}`).expect(404);
    await here.delete(`/api/sessions/${other.id}`).expect(204);
    expect((await there.get('/api/session')).body.user).toBeNull();
    expect((await here.get('/api/session')).body.user.name).toBe('petra');
  });

  it('end after an hour without a request and after a day in any case, by the database’s clock', async () => {
    const visitor = await server.signIn('idle', 'modeller');
    const age = (change: string): Promise<unknown> => server.context.pool.query(change, [visitor.personId]);
    await visitor.get('/api/sessions').expect(200);
    await age(`UPDATE session SET started_at = now() - interval '23 hours 59 minutes' WHERE person_id = $1`);
    await visitor.get('/api/sessions').expect(200);
    await age(`UPDATE session SET started_at = now() - interval '24 hours 1 second' WHERE person_id = $1`);
    await visitor.get('/api/sessions').expect(401);
  });

  it('end at once on sign-out', async () => {
    const visitor = await server.signIn('leaver', 'modeller');
    const { body } = await visitor.delete('/api/session').expect(200);
    expect(body.user).toBeNull();
    await visitor.get('/api/sessions').expect(401);
    expect((await record('session.signed-out')).map((row) => row['actor_name'])).toContain('leaver');
  });
});

describe('a change of password', () => {
  it('wants the present one, length, and nothing that is guessed first, and says why', async () => {
    const visitor = await server.signIn('changer', 'modeller');
    const change = (current: string, next: string): supertest.Test =>
      visitor.put('/api/session/password').send({ current, next });
    const wrong = await change('not the present password', 'quite another long one').expect(422);
    expect(wrong.body.problems[0]).toMatchObject({ code: 'password-wrong', where: { field: 'current' } });
    expect((await change(testPassword, 'fourteen chars').expect(422)).body.problems[0].message).toBe(
      'Use at least 15 characters',
    );
    for (const [bad, why] of [
      ['Password1234567!', 'guessed first'],
      ['changer2024changer!', 'guessed first'],
      ['aaaaaaaaaaaaaaaaaa', 'over and over'],
      ['123456789012345678', 'neighbouring keys'],
      ['correct horse battery staple', 'tried first'],
    ]) {
      const refused = await change(testPassword, bad).expect(422);
      expect(refused.body.problems[0].code).toBe('password-blocked');
      expect(refused.body.problems[0].message).toContain(why);
    }
  });

  it('ends every session of the person and starts this one anew', async () => {
    const here = await server.signIn('mover', 'modeller');
    const there = new Visitor(supertest.agent(server.url), here.personId);
    await there.enter('mover@saltmarsh.example');
    const answer = await here
      .put('/api/session/password')
      .send({ current: testPassword, next: 'a heron on one leg, waiting' })
      .expect(200);
    expect(answer.body.user.name).toBe('mover');
    await there.get('/api/sessions').expect(401);
    expect((await here.get('/api/sessions').expect(200)).body.sessions).toHaveLength(1);
    const visitor = await stranger();
    await visitor.signIn('mover@saltmarsh.example', testPassword).expect(401);
    await visitor.signIn('mover@saltmarsh.example', 'a heron on one leg, waiting').expect(200);
  });

  it('tells passwords apart beyond the 72 bytes that bcrypt reads', async () => {
    const visitor = await server.signIn('lengthy', 'modeller');
    const long = `${'reed warbler, '.repeat(8)}one`;
    await visitor.put('/api/session/password').send({ current: testPassword, next: long }).expect(200);
    const at = await stranger();
    await at.signIn('lengthy@saltmarsh.example', `${long.slice(0, 100)} two`).expect(401);
    await at.signIn('lengthy@saltmarsh.example', long).expect(200);
  });
});
