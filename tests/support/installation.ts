import { type ChildProcess, execFile, spawn } from 'node:child_process';
import { closeSync, openSync, readFileSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { promisify } from 'node:util';
import { ensureBuilt } from '../../tools/build.mjs';
import { createTestDataFolder } from './keys';
import { asOwner, dropDatabase, groundName, inDatabase, testServer } from './test-server';

/** How one of the demo's people signs in. */
export interface SignIn {
  readonly role: string;
  readonly email: string;
  readonly password: string;
}

export interface InstallationOptions {
  /** With the demo's people and model; otherwise empty, waiting to be set up. */
  readonly demo: boolean;
  readonly environment?: Readonly<Record<string, string>>;
}

/** Tallystone as it is installed: the built server and client, a web process and a worker process, on a database of its own. */
export interface Installation {
  readonly url: string;
  readonly appUrl: string;
  readonly ownerUrl: string;
  readonly dataFolder: string;
  readonly signIns: readonly SignIn[];
  /** Where the first administrator is set up, when there is no demo. */
  readonly setUp: string | null;
  /** Kills a service (kill -9) and resolves when it is gone. */
  kill(service: Service): Promise<void>;
  /** Starts a service again. */
  start(service: Service): Promise<void>;
  stop(): Promise<void>;
}

export type Service = 'web' | 'worker';

const root = fileURLToPath(new URL('../..', import.meta.url));
const distribution = join(root, 'dist', 'server');
const run = promisify(execFile);

function freePort(): Promise<number> {
  return new Promise((resolve, reject) => {
    const server = createServer();
    server.once('error', reject);
    server.listen({ host: '127.0.0.1', port: 0 }, () => {
      const address = server.address();
      server.close(() =>
        typeof address === 'object' && address ? resolve(address.port) : reject(new Error('no port was given')),
      );
    });
  });
}

interface Ready {
  readonly type: 'ready';
  readonly url?: string;
  readonly setUp?: string;
}

function launch(service: Service, environment: NodeJS.ProcessEnv, log: string): Promise<{ child: ChildProcess; ready: Ready }> {
  return new Promise((resolve, reject) => {
    const handle = openSync(log, 'a');
    const child = spawn(process.execPath, ['--enable-source-maps', join(distribution, 'main.js'), `--services=${service}`], {
      cwd: root,
      env: environment,
      stdio: ['ignore', handle, handle, 'ipc'],
    });
    closeSync(handle);
    child.on('message', (message: Ready | { readonly type: 'failed'; readonly message: string }) => {
      if (message.type === 'ready') resolve({ child, ready: message });
      else reject(new Error(`${service}: ${message.message}`));
    });
    child.once('error', reject);
    child.once('exit', (code, signal) =>
      reject(new Error(`${service} ended (${signal ?? code}) before it was ready:\n${readFileSync(log, 'utf8').slice(-4000)}`)),
    );
  });
}

async function end(child: ChildProcess | undefined, signal: NodeJS.Signals): Promise<void> {
  if (!child || child.exitCode !== null || child.signalCode !== null) return;
  const ended = new Promise<void>((resolve) => child.once('exit', () => resolve()));
  child.kill(signal);
  const late = setTimeout(() => child.kill('SIGKILL'), 20_000);
  await ended;
  clearTimeout(late);
}

/** A migrated database and a data folder, with the demo or without: what an installation starts on. Plain data, so that another process can start on it. */
export interface Ground {
  readonly database: string;
  readonly folder: string;
  readonly keysFile: string;
  readonly signIns: readonly SignIn[];
}

async function environmentOf({ database, folder, keysFile }: Omit<Ground, 'signIns'>): Promise<NodeJS.ProcessEnv> {
  return {
    ...process.env,
    NODE_ENV: 'production',
    DATABASE_URL: inDatabase((await testServer()).appUrl, database),
    TALLYSTONE_DATA: folder,
    TALLYSTONE_KEYS: keysFile,
    TALLYSTONE_SERVER_DIST: distribution,
  };
}

async function remove({ database, folder }: Omit<Ground, 'signIns'>): Promise<void> {
  await dropDatabase(await testServer(), database);
  rmSync(folder, { recursive: true, force: true });
}

/**
 * Migrates a fresh database through the command-line entry and makes the demo if asked.
 *
 * @example
 * const ground = await layGround({ demo: true });
 * const installation = await installOn(ground);
 */
export async function layGround({ demo, environment = {} }: InstallationOptions): Promise<Ground> {
  await ensureBuilt('server');
  const server = await testServer();
  const database = groundName();
  await asOwner(server, (client) => client.query(`CREATE DATABASE "${database}"`));
  const { path: folder, keysFile } = createTestDataFolder();
  const bare = { database, folder, keysFile };
  try {
    const env = { ...(await environmentOf(bare)), TALLYSTONE_DEMO: demo ? '1' : '', ...environment };
    await run(process.execPath, [join(distribution, 'cli', 'migrate.js')], {
      cwd: root,
      env: { ...env, DATABASE_OWNER_URL: inDatabase(server.ownerUrl, database) },
    });
    if (!demo) return { ...bare, signIns: [] };
    const { stdout } = await run(process.execPath, [join(distribution, 'cli', 'demo.js')], {
      cwd: root,
      env,
      maxBuffer: 1 << 26,
    });
    const { signIns } = JSON.parse(stdout.trim().split('\n').at(-1) ?? '') as { signIns: SignIn[] };
    return { ...bare, signIns };
  } catch (error) {
    await remove(bare);
    throw error;
  }
}

/**
 * Builds what changed, lays the ground and starts both services on free ports.
 *
 * @example
 * const installation = await install({ demo: true });
 * await fetch(`${installation.url}health/ready`);
 * await installation.stop();
 */
export async function install(options: InstallationOptions): Promise<Installation> {
  return installOn(await layGround(options), options.environment);
}

/** Starts both services on ground that has been laid, by this process or by one before it. Stopping takes the ground away. */
export async function installOn(ground: Ground, environment: InstallationOptions['environment'] = {}): Promise<Installation> {
  await Promise.all([ensureBuilt('server'), ensureBuilt('web')]);
  const port = await freePort();
  const env: NodeJS.ProcessEnv = {
    ...(await environmentOf(ground)),
    HOST: '127.0.0.1',
    PORT: String(port),
    TALLYSTONE_DEMO: ground.signIns.length > 0 ? '1' : '',
    TALLYSTONE_WEB: join(root, 'dist', 'web', 'browser'),
    ...environment,
  };
  const running = new Map<Service, ChildProcess>();
  const start = async (service: Service): Promise<Ready> => {
    const { child, ready } = await launch(service, env, join(ground.folder, `${service}.log`));
    running.set(service, child);
    return ready;
  };
  const stop = async (): Promise<void> => {
    await Promise.all([...running.values()].map((child) => end(child, 'SIGTERM')));
    await remove(ground);
  };
  try {
    const [web] = await Promise.all([start('web'), start('worker')]);
    const server = await testServer();
    return {
      url: web.url ?? `http://127.0.0.1:${port}/`,
      appUrl: inDatabase(server.appUrl, ground.database),
      ownerUrl: inDatabase(server.ownerUrl, ground.database),
      dataFolder: ground.folder,
      signIns: ground.signIns,
      setUp: web.setUp ?? null,
      kill: (service) => end(running.get(service), 'SIGKILL'),
      start: (service) => start(service).then(() => undefined),
      stop,
    };
  } catch (error) {
    await stop();
    throw error;
  }
}
