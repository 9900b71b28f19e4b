import { randomUUID } from 'node:crypto';
import { type Role, roles } from '@tallystone/contracts/people/schema';
import supertest from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { allRoutes } from '../../server/src/routes/index';
import { applicantsWithRisk, characteristicsOf, classApplicants, defineApplicants } from '../support/binned';
import { heldRuns } from '../support/held-runs';
import { IntakeServer, Visitor } from '../support/intake';
import { choose, fitPath, freeze, makeDocument, scale } from '../support/line';
import { accessTable } from './access/index';
import { describeErasing } from './access/erased-rows';
import type { AccessRow, ByRole, Subject, Verdict } from './access/access';

let server: IntakeServer;
const visitors = new Map<Role, Visitor>();
/** A modeller who works on another model than the table's: to them all of it is another's. */
let outsider: Visitor;
let disabled: Visitor;
/** Identifiers by the name of the path's parameter: one model with everything that a model has, made by the table's modeller. */
let world: Record<string, string>;

beforeAll(async () => {
  server = await IntakeServer.start({ handlers: heldRuns.handlers });
  for (const role of roles) visitors.set(role, await server.signIn(role, role));
  disabled = await server.signIn('disabled', 'modeller', 'admin');
  await server.context.pool.query(`UPDATE people SET state = 'disabled' WHERE id = $1`, [disabled.personId]);
  outsider = await server.signIn('other', 'modeller');
  await outsider.model('Another model');
  world = await wholeModel(visitors.get('modeller')!, (await server.signIn('bystander')).personId);
}, 240_000);
afterAll(() => server.stop());

/** A model of this modeller's with a row of every kind, from an upload under way to a document. */
async function wholeModel(modeller: Visitor, personId: string): Promise<Record<string, string>> {
  const modelId = await modeller.model('A whole model');
  const { definitionId, sampleId } = await defineApplicants(modeller, modelId, applicantsWithRisk(800));
  // Nothing rests on this one: it can be read anew and discarded.
  const spare = await modeller.upload(modelId, Buffer.from('a,bad\n1,0\n2,1\n'));
  const begun = await modeller.beginUpload(modelId, 10).expect(201);
  const binning = await classApplicants(modeller, modelId, definitionId);
  const { characteristics } = await characteristicsOf(modeller, binning.id);
  const fit = await fitPath(modeller, modelId, binning.id, { lambda: { count: 5, smallestRatio: 0.01, earlyStop: false }, folds: { count: 3, seed: 1, classing: 'once' } });
  const second = await fitPath(modeller, modelId, binning.id, { name: 'Ridge', mixing: 0, lambda: { count: 5, smallestRatio: 0.01, earlyStop: false }, folds: { count: 3, seed: 1, classing: 'once' } });
  for (const { id } of [fit, second]) await choose(modeller, id, { index: 4, rule: 'by hand', reason: 'as an example' });
  await scale(modeller, fit.id);
  const version = await freeze(modeller, modelId, fit.id);
  const { documentId } = await makeDocument(modeller, version.id);
  return {
    modelId,
    sampleId,
    spareSampleId: spare.id,
    uploadId: begun.headers.location.split('/').at(-1)!,
    definitionId,
    binningId: binning.id,
    characteristicId: characteristics[0].id,
    fitId: fit.id,
    secondFitId: second.id,
    versionId: version.id,
    documentId,
    personId,
    runId: fit.runId!,
  };
} // prettier-ignore

const name = ({ endpoint }: { endpoint: { method: string; path: string } }): string => `${endpoint.method} ${endpoint.path}`;

/** What Express really has mounted, read from its own stack. */
function mounted(): string[] {
  interface Layer {
    readonly route?: { readonly path: string; readonly methods: Readonly<Record<string, boolean>> };
  }
  const stack = (server.app.router as unknown as { stack: Layer[] }).stack;
  return stack.flatMap(({ route }) =>
    route ? Object.keys(route.methods).map((method) => `${method.toUpperCase()} ${route.path}`) : [],
  );
}

describe('the table', () => {
  it('names every route that Express has, once, and no other', () => {
    const pages = 'GET /{*path}';
    const real = mounted().filter((route) => route !== pages);
    expect([...real].sort()).toEqual(allRoutes().map(name).sort());
    expect(new Set(real).size).toBe(real.length);
    expect(accessTable.map(({ route }) => route).sort()).toEqual([...real].sort());
  });

  it('says of every route what happens to somebody', () => {
    for (const row of accessTable) {
      const said = [row.own, row.another, row.nonexistent].filter((verdicts) => verdicts !== undefined);
      expect(said.length, row.route).toBeGreaterThan(0);
      // A path about a row is also asked about one that is not there, and about one that is somebody else's.
      if (row.route.includes('/:')) expect(row.nonexistent, row.route).toBeDefined();
      if (/:(model|upload|definition|binning|characteristic|fit|version|document|run)Id/.test(row.route)) {
        expect(row.own, row.route).toBeDefined();
        expect(row.another, row.route).toBeDefined();
      }
    }
  });
});

function pathOf(row: AccessRow, subject: Subject): string {
  const path = row.route.split(' ')[1].replace(/:(\w+)/g, (_, parameter: string) => {
    if (subject === 'nonexistent') return randomUUID();
    const id = world[row.params?.[parameter] ?? parameter];
    if (id === undefined) throw new Error(`${row.route}: the world has no ${parameter}`);
    return id;
  });
  return row.query ? `${path}?${row.query(world)}` : path;
}

function ask(visitor: Visitor, row: AccessRow, subject: Subject): supertest.Test {
  const method = row.route.split(' ')[0].toLowerCase() as 'get' | 'post' | 'put' | 'patch' | 'delete' | 'head';
  const request = visitor[method](pathOf(row, subject));
  for (const [header, value] of Object.entries(row.headers ?? {})) void request.set(header, value);
  if (row.route === 'GET /api/events') {
    // A stream that is let in does not end by itself.
    void request.buffer(false).parse((response, done) => {
      (response as unknown as { destroy(): void }).destroy();
      done(null, null);
    });
  }
  return method === 'post' || method === 'put'
    ? request.send(row.headers ? undefined : {})
    : method === 'patch' && !row.headers
      ? request.send({})
      : request;
}

function hold(status: number, verdict: Verdict, what: string): void {
  if (verdict === 'yes') {
    expect([401, 403, 404], what).not.toContain(status);
    expect(status, what).toBeLessThan(500);
  } else expect(status, what).toBe(verdict);
}

/** Routes that end the session they are sent with: asked by someone who can be spared. */
const endsSession = new Set(['DELETE /api/session']);
/** Its 401 is about the credentials in the body; nothing is refused to anybody. */
const aboutCredentials = new Set(['POST /api/session']);

async function statusOf(request: supertest.Test): Promise<number> {
  try {
    return (await request).status;
  } catch (error) {
    const { status, code } = error as { status?: number; code?: string };
    if (status !== undefined) return status;
    // The stream that was let in and left at once.
    if (code === 'ECONNRESET' || code === 'ABORTED') return 200;
    throw error;
  }
}

/** The table's people; to a row that is another's comes the modeller of another model. */
const visitorOf = (role: Role, subject: Subject): Visitor =>
  subject === 'another' && role === 'modeller' ? outsider : visitors.get(role)!;

describe.each(accessTable.filter(({ route }) => !aboutCredentials.has(route)).map((row) => [row.route, row] as const))(
  '%s',
  (_route, row) => {
    it('refuses who is signed out or disabled, and treats each role as the table says', async () => {
      const subject: Subject = row.own ? 'own' : row.another ? 'another' : 'nonexistent';
      const nobody = new Visitor(supertest.agent(server.url), '');
      await nobody.meet();
      const anonymous = row.anonymous ?? 401;
      hold(await statusOf(ask(nobody, row, subject)), anonymous, `anonymous ${row.route}`);
      // The token of a disabled person's session no longer fits; routes for anyone refuse it as that of a stranger from elsewhere.
      const gone = await statusOf(ask(disabled, row, subject));
      if (anonymous === 401) expect(gone, `disabled ${row.route}`).toBe(401);
      if (endsSession.has(row.route)) return;

      for (const which of ['another', 'nonexistent', 'own'] as const) {
        const verdicts: ByRole | undefined = row[which];
        if (!verdicts) continue;
        // Refusals first: who is let in may change what the next would find.
        const order = [...roles].sort((a, b) => Number(verdicts[a] === 'yes') - Number(verdicts[b] === 'yes'));
        for (const role of order)
          hold(await statusOf(ask(visitorOf(role, which), row, which)), verdicts[role], `${role} ${row.route} (${which})`);
      }
    });
  },
);

describe('every change', () => {
  const changes = accessTable.filter(({ route }) => !/^(GET|HEAD) /.test(route));
  it.each(changes.map((row) => [row.route, row] as const))(
    '%s is refused without the token and with a foreign one',
    async (_route, row) => {
      const visitor = visitors.get('admin')!;
      const method = row.route.split(' ')[0].toLowerCase() as 'post' | 'put' | 'patch' | 'delete';
      const path = pathOf(row, 'nonexistent');
      expect((await visitor.agent[method](path).send(row.headers ? undefined : {})).body.code).toBe('cross-site');
      const foreign = await visitor.agent[method](path)
        .set('X-XSRF-TOKEN', visitors.get('auditor')!.currentToken)
        .send(row.headers ? undefined : {});
      expect(foreign.status).toBe(403);
      expect(foreign.body.code).toBe('cross-site');
    },
  );
});

describe('what is not there', () => {
  it('is a problem for the API, whatever the method', async () => {
    for (const method of ['get', 'post', 'put', 'patch', 'delete'] as const) {
      const { body, headers } = await supertest(server.url)[method]('/api/no-such-thing').expect(404);
      expect(headers['content-type']).toContain('application/problem+json');
      expect(body).toMatchObject({ status: 404, code: 'not-found', problems: [] });
    }
    // An identifier that cannot be one is a row that is not there.
    await visitors.get('auditor')!.get('/api/people/1%20OR%201=1').expect(404);
  });

  it('and what is malformed are problems too', async () => {
    const admin = visitors.get('admin')!;
    expect(
      (await admin.post('/api/invitations').set('Content-Type', 'application/json').send('{"name":').expect(400)).body.code,
    ).toBe('malformed');
    expect((await admin.post('/api/invitations').set('Content-Type', 'text/plain').send('name').expect(415)).body.code).toBe(
      'unsupported-media-type',
    );
    expect(
      (
        await admin
          .post('/api/invitations')
          .send({ name: 'x'.repeat(300_000) })
          .expect(413)
      ).body.code,
    ).toBe('too-large');
    expect((await admin.get('/api/people/%E0%A4%A').expect(400)).body.code).toBe('malformed');
  });
});

describe('the description of the API', () => {
  it('has every route, and every reference in it leads somewhere', async () => {
    const { body } = await visitors.get('auditor')!.get('/api/openapi.json').expect(200);
    const operations = Object.entries(body.paths as Record<string, object>).flatMap(([path, methods]) =>
      Object.keys(methods).map((method) => `${method.toUpperCase()} ${path.replace(/\{(\w+)\}/g, ':$1')}`),
    );
    expect(operations.sort()).toEqual(allRoutes().map(name).sort());
    const references = [...JSON.stringify(body).matchAll(/"\$ref":"#\/components\/schemas\/(\w+)"/g)].map(([, schema]) => schema);
    expect(references.length).toBeGreaterThan(20);
    for (const schema of references) expect(body.components.schemas).toHaveProperty(schema);
  });
});

// Last: the model that every route was asked about is left without its rows.
describe('once the rows of the sample are erased', () => {
  describeErasing(() => ({ server, world, modeller: visitors.get('modeller')!, validator: visitors.get('validator')!, admin: visitors.get('admin')!, compliance: visitors.get('compliance')! }));
});
