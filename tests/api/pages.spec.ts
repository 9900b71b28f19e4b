import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import supertest from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { IntakeServer } from '../support/intake';

const web = mkdtempSync(join(tmpdir(), 'tallystone-web-'));
let server: IntakeServer;

beforeAll(async () => {
  writeFileSync(
    join(web, 'index.html'),
    '<!doctype html><html><body><ts-root></ts-root><script src="main-ABCDEF12.js" type="module"></script></body></html>',
  );
  writeFileSync(join(web, 'main-ABCDEF12.js'), 'export {};');
  mkdirSync(join(web, 'media'));
  writeFileSync(join(web, 'favicon.svg'), '<svg xmlns="http://www.w3.org/2000/svg"/>');
  server = await IntakeServer.start({ worker: false, environment: { TALLYSTONE_WEB: web } });
});
afterAll(async () => {
  await server.stop();
  rmSync(web, { recursive: true });
});

const policyOf = (headers: Record<string, string>): Map<string, string[]> =>
  new Map(
    headers['content-security-policy'].split(';').map((part) => [part.trim().split(' ')[0], part.trim().split(' ').slice(1)]),
  );

describe('the page of the API', () => {
  it('is for people who are signed in, with a policy of its own and files of this server', async () => {
    const refused = await supertest(server.url).get('/api/page/').expect(401);
    expect(refused.body.code).toBe('signed-out');
    const reader = await server.signIn('ada', 'auditor');
    expect((await reader.get('/api/page').expect(308)).headers['location']).toBe('/api/page/');
    const { text, headers } = await reader.get('/api/page/').expect(200);
    expect(text).toContain('Tallystone: API');
    expect(text).not.toMatch(/https?:\/\/(?!www\.w3\.org)/);
    const policy = policyOf(headers);
    expect(policy.get('default-src')).toEqual(["'none'"]);
    expect(policy.get('script-src')).toEqual(["'self'"]);
    expect(text).not.toMatch(/<script(?![^>]*\bsrc=)/);
    for (const [, file] of text.matchAll(/(?:src|href)="\.\/([^"]+)"/g)) await reader.get(`/api/page/${file}`).expect(200);
    expect((await reader.get('/api/page/swagger-ui-init.js').expect(200)).text).toContain('/api/openapi.json');
  });
});

describe('pages', () => {
  it('have a policy without inline code, and a nonce of their own in the policy and on the root element', async () => {
    const [first, second] = await Promise.all(
      ['/', '/models/123/fit'].map((path) => supertest(server.url).get(path).expect(200)),
    );
    const nonces = [first, second].map(({ text }) => /<ts-root ngCspNonce="([^"]+)">/.exec(text)![1]);
    expect(nonces[0]).not.toBe(nonces[1]);
    const policy = policyOf(first.headers);
    expect(policy.get('default-src')).toEqual(["'none'"]);
    expect(policy.get('script-src')).toEqual(["'self'"]);
    expect(policy.get('style-src')).toEqual(["'self'", `'nonce-${nonces[0]}'`]);
    expect(policy.get('style-src-attr')).toEqual(["'none'"]);
    expect(policy.get('base-uri')).toEqual(["'none'"]);
    expect(policy.get('frame-ancestors')).toEqual(["'none'"]);
    expect(policy.get('require-trusted-types-for')).toEqual(["'script'"]);
    expect(first.headers['content-security-policy']).not.toMatch(/unsafe-(inline|eval)|\*/);
    expect(first.headers['cache-control']).toBe('no-store');
    // Plain HTTP on loopback: a browser told to use HTTPS from now on would be locked out.
    expect(first.headers['strict-transport-security']).toBeUndefined();
    expect(first.headers['x-powered-by']).toBeUndefined();
  });

  it('come with files that are kept as long as their names say, and nothing in place of a missing file', async () => {
    const script = await supertest(server.url).get('/main-ABCDEF12.js').expect(200);
    expect(script.headers['cache-control']).toContain('immutable');
    expect(script.headers['x-content-type-options']).toBe('nosniff');
    expect((await supertest(server.url).get('/favicon.svg').expect(200)).headers['cache-control']).toBe('no-cache');
    await supertest(server.url).get('/main-00000000.js').expect(404);
    await supertest(server.url)
      .get('/..%2f..%2fetc/passwd')
      .expect((response) => expect(response.text).not.toContain('root:'));
  });

  it('are not what the API answers with, whose policy lets nothing load', async () => {
    const { headers } = await supertest(server.url).get('/api/session').expect(200);
    expect(headers['content-security-policy']).toBe("default-src 'none';frame-ancestors 'none';base-uri 'none'");
    expect(headers['cache-control']).toBe('no-store');
    expect(headers['x-request-id']).toMatch(/^[\w-]{8,}$/);
  });

  it('over HTTPS have cookies that no other host can plant, until the process is asked to stop', async () => {
    const secure = await IntakeServer.start({
      worker: false,
      environment: { ORIGIN: 'https://tally.saltmarsh.example', TALLYSTONE_WEB: web },
    });
    try {
      const agent = supertest(secure.app);
      const { headers } = await agent.get('/').set('X-Forwarded-Proto', 'https').expect(200);
      expect(headers['strict-transport-security']).toContain('max-age=31536000');
      const opened = await agent.get('/api/session').set('X-Forwarded-Proto', 'https').expect(200);
      expect(String(opened.headers['set-cookie'])).toMatch(/^XSRF-TOKEN=.*; Path=\/; Secure; SameSite=Lax$/);
      // Once asked to stop it is alive, but not ready for more.
      expect((await agent.get('/health/ready').expect(200)).body).toEqual({ status: 'ok' });
      secure.context.beginStop();
      expect((await agent.get('/health/ready').expect(503)).body).toEqual({ status: 'stopping' });
      await agent.get('/health/live').expect(200);
    } finally {
      await secure.stop();
    }
  });
});
