import { type Server, createServer } from 'node:http';
import type { AddressInfo } from 'node:net';
import type { Role } from '@tallystone/contracts/people/schema';
import type { Run } from '@tallystone/contracts/runs/schema';
import type { Express } from 'express';
import { hash } from 'bcryptjs';
import supertest from 'supertest';
import { buildApp } from '../../server/src/app';
import { readConfig } from '../../server/src/config/environment';
import { type Context, openContext } from '../../server/src/context';
import { inTransaction } from '../../server/src/database/transaction';
import { type WorkerService, startWorker } from '../../server/src/jobs/worker';
import type { Handler } from '../../server/src/jobs/handler';
import { createLog } from '../../server/src/logging/log';
import { preparePassword } from '../../server/src/services/passwords/prepare';
import { createPerson } from '../../server/src/services/people/create';
import { stopThreads } from '../../server/src/threads/run-in-thread';
import { type TestDatabase, createTestDatabase } from './database';
import { type TestDataFolder, createTestDataFolder } from './keys';

const password = 'reeds-and-rushes-in-the-wind';
export const testPassword = password;

/** The whole product on a database of its own, served in this process: the application, a worker, and people made as needed. */
export class IntakeServer {
  private constructor(
    readonly database: TestDatabase,
    readonly folder: TestDataFolder,
    readonly context: Context,
    readonly app: Express,
    private readonly worker: WorkerService | null,
    private readonly listening: Server,
  ) {}

  static async start(
    options: { worker?: boolean; handlers?: readonly Handler[]; environment?: Record<string, string> } = {},
  ): Promise<IntakeServer> {
    const database = await createTestDatabase();
    const folder = createTestDataFolder();
    const config = readConfig({ ...IntakeServer.environment(database, folder), ...options.environment });
    const context = await openContext(config, createLog(config.logLevel));
    const worker = options.worker === false ? null : await startWorker(context, options.handlers);
    const app = buildApp(context);
    // Listening once: supertest would open a server of its own for every request.
    const listening = createServer({ keepAliveTimeout: 60_000 }, app);
    await new Promise<void>((resolve) => listening.listen(0, '127.0.0.1', resolve));
    return new IntakeServer(database, folder, context, app, worker, listening);
  }

  static environment(database: TestDatabase, folder: TestDataFolder): Record<string, string> {
    return {
      DATABASE_URL: database.appUrl,
      TALLYSTONE_DATA: folder.path,
      TALLYSTONE_KEYS: folder.keysFile,
      LOG_LEVEL: process.env.TEST_LOG_LEVEL ?? 'silent',
      PORT: '0',
    };
  }

  /** Where it listens, on loopback. */
  get url(): string {
    return `http://127.0.0.1:${(this.listening.address() as AddressInfo).port}`;
  }

  async stop(): Promise<void> {
    this.listening.close();
    this.listening.closeAllConnections();
    await this.worker?.stop();
    await stopThreads();
    await this.context.close();
    await this.database.drop();
    this.folder.remove();
  }

  /** A new person with these roles, signed in. */
  signIn(name: string, ...roles: Role[]): Promise<Visitor> {
    return this.signInAt(this.url, name, ...roles);
  }

  /** The same at another process on this database. */
  async signInAt(url: string, name: string, ...roles: Role[]): Promise<Visitor> {
    const email = `${name}@saltmarsh.example`;
    // Of the least cost: the product checks a password at the cost that its hash states, and hundreds of people sign in here.
    const passwordHash = await hash(preparePassword(this.context, password), 4);
    const person = await inTransaction(this.context.sequelize, (tx) =>
      createPerson(tx, { name, email, passwordHash, roles, by: 'set-up' }),
    );
    const visitor = new Visitor(supertest.agent(url), person.id);
    await visitor.enter(email);
    return visitor;
  }
}

/** Someone in front of a browser: keeps cookies and sends the cross-site token as the client does. */
export class Visitor {
  private token = '';
  private readonly cookies = new Map<string, string>();

  constructor(
    readonly agent: ReturnType<typeof supertest.agent>,
    readonly personId: string,
  ) {}

  /** The cross-site token as it is now. */
  get currentToken(): string {
    return this.token;
  }

  /** Opens a page without signing in: brings the token. */
  async meet(): Promise<void> {
    await this.keepToken(this.agent.get('/api/session'));
  }

  async enter(email: string): Promise<void> {
    await this.meet();
    await this.keepToken(this.agent.post('/api/session').set('X-XSRF-TOKEN', this.token).send({ email, password }).expect(200));
  }

  private async keepToken(request: supertest.Test): Promise<void> {
    const response = await request;
    const cookies = response.headers['set-cookie'] as unknown as string[] | undefined;
    for (const cookie of cookies ?? []) {
      const [, name, value] = /^([^=]+)=([^;]*)/.exec(cookie) ?? [];
      this.cookies.set(name, value);
      if (name === 'XSRF-TOKEN') this.token = decodeURIComponent(value);
    }
  }

  /** For requests that another client sends in this person's name. */
  credentials(): { cookie: string; token: string } {
    return { cookie: [...this.cookies].map(([name, value]) => `${name}=${value}`).join('; '), token: this.token };
  }

  get = (path: string): supertest.Test => this.agent.get(path);
  private send = (request: supertest.Test): supertest.Test => request.set('X-XSRF-TOKEN', this.token);
  post = (path: string): supertest.Test => this.send(this.agent.post(path));
  put = (path: string): supertest.Test => this.send(this.agent.put(path));
  patch = (path: string): supertest.Test => this.send(this.agent.patch(path));
  delete = (path: string): supertest.Test => this.send(this.agent.delete(path));
  head = (path: string): supertest.Test => this.agent.head(path);

  /** A model of this person's own. */
  async model(name = 'Personal loans'): Promise<string> {
    const response = await this.post('/api/models')
      .send({ ...modelFields, name })
      .expect(201);
    return (response.body as { id: string }).id;
  }

  /** Sends a whole file by the tus protocol, in pieces, and returns the sample that it became. */
  async upload(
    modelId: string,
    bytes: Buffer,
    fileName = 'applicants.csv',
    piece = 4 * 1024 * 1024,
  ): Promise<{ id: string; sha256: string }> {
    const begun = await this.beginUpload(modelId, bytes.length, fileName).expect(201);
    const url = begun.headers.location;
    for (let offset = 0; offset < bytes.length; offset += piece) {
      await this.sendUpload(url, offset, bytes.subarray(offset, offset + piece)).expect(204);
    }
    const list = await this.get(`/api/models/${modelId}/samples`).expect(200);
    return (list.body as { samples: { id: string; sha256: string }[] }).samples[0];
  }

  beginUpload = (modelId: string, size: number, fileName = 'applicants.csv'): supertest.Test =>
    this.post(`/api/models/${modelId}/uploads`)
      .set('Tus-Resumable', '1.0.0')
      .set('Upload-Length', String(size))
      .set('Upload-Metadata', `filename ${Buffer.from(fileName).toString('base64')}`);

  sendUpload = (url: string, offset: number, bytes: Buffer): supertest.Test =>
    this.patch(url)
      .set('Tus-Resumable', '1.0.0')
      .set('Upload-Offset', String(offset))
      .set('Content-Type', 'application/offset+octet-stream')
      .send(bytes);

  arrivedOf = (url: string): supertest.Test => this.get(`${url}/arrived`);

  askUpload = (url: string): supertest.Test => this.head(url).set('Tus-Resumable', '1.0.0');

  /** Waits until a run has ended. */
  async ended(runId: string, patience = 60_000): Promise<Run> {
    const from = Date.now();
    for (;;) {
      const response = await this.get(`/api/runs/${runId}`).expect(200);
      const run = response.body as Run;
      if (['succeeded', 'failed', 'cancelled'].includes(run.state)) return run;
      const waited = Date.now() - from;
      if (waited > patience) throw new Error(`Run ${runId} is still ${run.state} (${run.phase})`);
      // Asking takes processor time from the run: a long one is asked about less often.
      await new Promise((resolve) => setTimeout(resolve, Math.min(300, 20 + waited / 10)));
    }
  }

  /** Uploads and reads under the proposed choices, or those given beside. */
  async sample(
    modelId: string,
    csv: string | Buffer,
    choices: Record<string, unknown> = {},
  ): Promise<{ id: string; path: string; run: Run }> {
    const { id } = await this.upload(modelId, Buffer.isBuffer(csv) ? csv : Buffer.from(csv));
    const path = `/api/models/${modelId}/samples/${id}`;
    const preview = await this.post(`${path}/preview`).send(choices).expect(200);
    const started = await this.post(`${path}/readings`)
      .send((preview.body as { choices: object }).choices)
      .expect(202);
    return { id, path, run: await this.ended((started.body as Run).id) };
  }
}

export const modelFields = {
  name: 'Personal loans',
  purpose: 'Decide on applications for personal loans',
  product: 'Personal loan',
  population: 'Applicants of Saltmarsh Mutual',
  jurisdiction: 'United Kingdom',
  owner: 'Head of Credit Risk',
  materialityTier: 2,
};
