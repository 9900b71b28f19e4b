import { type ChildProcess, spawn } from 'node:child_process';
import { chmodSync, existsSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';

/** `npm start` as a newcomer has it: the first time, a second time, a busy port, Ctrl-C, and after it was killed. */
const script = fileURLToPath(new URL('../../tools/start.mjs', import.meta.url));
const folder = mkdtempSync(join(tmpdir(), 'tallystone-start-'));
const data = join(folder, 'data');
const started: Start[] = [];
let port: number;

interface Start {
  readonly child: ChildProcess;
  readonly said: () => string;
  readonly ended: Promise<number | null>;
}

function start(dataFolder: string): Start {
  const env: Record<string, string | undefined> = { ...process.env, PORT: String(port), TALLYSTONE_DATA: dataFolder };
  // As from a shell: what this run of tests is told is not for the product.
  for (const name of Object.keys(env)) if (/^(npm_|TALLYSTONE_TEST|DATABASE|NODE_ENV|VITEST)/.test(name)) delete env[name];
  const child = spawn(process.execPath, [script], { env, stdio: ['ignore', 'pipe', 'pipe'] });
  let said = '';
  for (const stream of [child.stdout, child.stderr]) stream.on('data', (chunk: Buffer) => (said += chunk.toString()));
  const ended = new Promise<number | null>((resolve) => child.once('close', resolve));
  const one = { child, said: () => said, ended };
  started.push(one);
  return one;
}

/** Waits until it says where it is to be found. */
async function ready(one: Start): Promise<void> {
  for (;;) {
    if (one.said().includes('Ctrl-C stops it.')) return;
    if (one.child.exitCode !== null || one.child.signalCode !== null) throw new Error(`It ended: ${one.said()}`);
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
}

const address = (): string => `http://127.0.0.1:${port}/`;
const answers = (): Promise<boolean> =>
  fetch(address()).then(
    async (response) => response.ok && (await response.text()).includes('<title>Tallystone'),
    () => false,
  );

/** The demo's modeller at the door, as the start prints how to sign in: 200 when database and application are there. */
async function signsIn(printed: string): Promise<number> {
  const [, email, password] = /^ {2}modeller\s+(\S+)\s+(\S+)$/m.exec(printed) ?? [];
  const met = await fetch(`${address()}api/session`);
  const cookies = met.headers.getSetCookie().map((cookie) => cookie.split(';')[0]);
  const token = decodeURIComponent(cookies.find((cookie) => cookie.startsWith('XSRF-TOKEN='))!.split('=')[1]);
  const answer = await fetch(`${address()}api/session`, {
    method: 'POST',
    headers: { 'Content-Type': 'application/json', Cookie: cookies.join('; '), 'X-XSRF-TOKEN': token },
    body: JSON.stringify({ email, password }),
  });
  return answer.status;
}

const childrenOf = (): number[] => (JSON.parse(readFileSync(join(data, 'run.json'), 'utf8')) as { children: number[] }).children;
const lives = (pid: number): boolean => existsSync(`/proc/${pid}`);
const postmaster = join(data, 'postgres', 'postmaster.pid');

beforeAll(async () => {
  // Run as root, PostgreSQL has an account of its own, which has to pass here.
  chmodSync(folder, 0o755);
  const probe = createServer();
  port = await new Promise((resolve) => probe.listen(0, '127.0.0.1', () => resolve((probe.address() as { port: number }).port)));
  await new Promise((resolve) => probe.close(resolve));
});
afterAll(async () => {
  for (const { child, ended } of started) {
    if (child.exitCode === null && child.signalCode === null) child.kill('SIGINT');
    await ended;
  }
  rmSync(folder, { recursive: true, force: true });
}, 120_000);

describe('npm start', { timeout: 240_000 }, () => {
  let first: Start;
  let killed: number[];

  it('makes everything there has to be, serves it, and prints how to sign in', async () => {
    first = start(data);
    await ready(first);
    expect(await answers()).toBe(true);
    expect(await signsIn(first.said())).toBe(200);
    for (const role of ['modeller', 'validator', 'compliance', 'admin', 'auditor'])
      expect(first.said()).toMatch(new RegExp(`^ {2}${role} `, 'm'));
  });

  it('on a port that is taken ends with a message that says what next, and harms nobody', async () => {
    const second = start(join(folder, 'other'));
    expect(await second.ended).toBe(1);
    expect(second.said()).toContain(`Port ${port} is in use by another program. Choose another one: PORT=${port + 1} npm start`);
    expect(await answers()).toBe(true);
  });

  it('on a data folder in use says which process has it', async () => {
    const second = start(data);
    expect(await second.ended).toBe(1);
    expect(second.said()).toContain(`Tallystone already runs from this data folder (process ${first.child.pid}, `);
    expect(await answers()).toBe(true);
  });

  it('killed with -9 leaves a state that the next start recovers', async () => {
    killed = childrenOf();
    expect(killed.filter(lives)).toHaveLength(2);
    first.child.kill('SIGKILL');
    await first.ended;
    const second = start(data);
    await ready(second);
    expect(killed.filter(lives)).toEqual([]);
    expect(await signsIn(second.said())).toBe(200);
  });

  it('so does one whose every process was killed, database and all', async () => {
    const before = started.at(-1)!;
    const database = Number(readFileSync(postmaster, 'utf8').split('\n')[0]);
    for (const pid of [before.child.pid!, ...childrenOf(), database]) process.kill(pid, 'SIGKILL');
    await before.ended;
    const next = start(data);
    await ready(next);
    expect(await signsIn(next.said())).toBe(200);
  });

  it('ends everything it started at Ctrl-C', async () => {
    const last = started.at(-1)!;
    const services = childrenOf();
    last.child.kill('SIGINT');
    expect(await last.ended).toBe(0);
    expect(services.filter(lives)).toEqual([]);
    expect(existsSync(postmaster)).toBe(false);
    expect(existsSync(join(data, 'run.json'))).toBe(false);
    expect(await answers()).toBe(false);
  });
});
