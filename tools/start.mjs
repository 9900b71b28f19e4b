#!/usr/bin/env node
/**
 * `npm start`: everything a machine with only Node.js and npm needs to run Tallystone, in one command.
 *
 * Installs the npm packages, installs (as root) and starts PostgreSQL, migrates, makes the demo, builds what changed, and
 * serves web and one worker on loopback until Ctrl-C. Environment (docs/operations.md has the whole list):
 *
 *   PORT                                 port of the web server (4820)
 *   TALLYSTONE_DATA                      data folder: database, keys, logs (.tallystone)
 *   DATABASE_URL + DATABASE_OWNER_URL    an existing PostgreSQL server instead of an own one
 *   TALLYSTONE_DEMO=off                  no demo data and no demo people
 */
import { spawn } from 'node:child_process';
import { createHash } from 'node:crypto';
import * as fs from 'node:fs';
import * as net from 'node:net';
import * as path from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { ensureBuilt } from './build.mjs';
import { ROOT, checkNode, ensurePackages, runProgram } from './install.mjs';
import { ensureKeys } from './keys.mjs';
import {
  SetupProblem,
  barredFolder,
  ensureProgramsFor,
  makeDataFolder,
  programsArePresent,
  startPostgres,
  stopPostgres,
  writePrivately,
} from './postgres.mjs';

const HOST = process.env.HOST || '127.0.0.1';
const DRAIN_MS = 35_000;
const SERVER = path.join(ROOT, 'dist', 'server');

const say = (line) => console.log(line);
const began = Date.now();

// --- What is asked for ------------------------------------------------------------------------------------------------

function askedPort() {
  const text = process.env.PORT || '4820';
  const port = Number(text);
  if (!/^\d+$/.test(text) || port < 1 || port > 65_535)
    throw new SetupProblem(`PORT is "${text}"; it must be a number from 1 to 65535.`);
  return port;
}

function existingServer() {
  const { DATABASE_URL: appUrl, DATABASE_OWNER_URL: ownerUrl } = process.env;
  if (!appUrl && !ownerUrl) return undefined;
  if (!appUrl || !ownerUrl) {
    throw new SetupProblem(
      'DATABASE_URL (the application role) and DATABASE_OWNER_URL (the role that owns the tables) go together; one of them is missing. With neither, Tallystone starts a PostgreSQL of its own.',
    );
  }
  return { appUrl, ownerUrl };
}

function portIsFree(port) {
  return new Promise((resolve) => {
    const server = net.createServer();
    server.once('error', (error) => resolve(error.code !== 'EADDRINUSE' && error.code !== 'EACCES' ? true : error.code));
    server.listen({ host: HOST, port, exclusive: true }, () => server.close(() => resolve(true)));
  });
}

async function checkPort(port) {
  const free = await portIsFree(port);
  if (free === 'EACCES')
    throw new SetupProblem(`Port ${port} may not be used by this account. Choose another one: PORT=4820 npm start`);
  if (free !== true)
    throw new SetupProblem(`Port ${port} is in use by another program. Choose another one: PORT=${port + 1} npm start`);
}

/**
 * The data folder: the one named, else .tallystone in the project. As root PostgreSQL runs as the account `postgres`, which
 * cannot enter a project under /root: then a folder of this project under /var/lib takes its place.
 */
function chooseDataFolder(ownPostgres) {
  if (process.env.TALLYSTONE_DATA) return path.resolve(process.env.INIT_CWD ?? process.cwd(), process.env.TALLYSTONE_DATA);
  const usual = path.join(ROOT, '.tallystone');
  if (!ownPostgres) return usual;
  const barred = barredFolder(usual);
  if (!barred) return usual;
  const other = `/var/lib/tallystone-${createHash('sha256').update(ROOT).digest('hex').slice(0, 8)}`;
  say(`The account "postgres" cannot enter ${barred}, so the data folder is ${other} (TALLYSTONE_DATA names another)`);
  return other;
}

// --- One run per data folder ------------------------------------------------------------------------------------------

function processCommand(pid) {
  try {
    return fs.readFileSync(`/proc/${pid}/cmdline`, 'utf8').replaceAll('\0', ' ');
  } catch {
    return undefined;
  }
}

/** A process id may have been given to another program since: where the system tells, the command line has to fit. */
function runs(pid, part) {
  if (!pid) return false;
  try {
    process.kill(pid, 0);
  } catch (error) {
    if (error.code !== 'EPERM') return false;
  }
  if (!fs.existsSync('/proc/self/cmdline')) return true;
  return processCommand(pid)?.includes(part) ?? false;
}

function readRun(file) {
  try {
    return JSON.parse(fs.readFileSync(file, 'utf8'));
  } catch {
    return {};
  }
}

async function waitUntil(condition, milliseconds) {
  const end = Date.now() + milliseconds;
  while (Date.now() < end) {
    if (condition()) return true;
    await sleep(100);
  }
  return condition();
}

/** Refuses a second run on the same data folder, and ends what a run that was killed left behind. */
async function takeOver(file) {
  const earlier = () => readRun(file);
  const going = () => runs(earlier().pid, 'start.mjs');
  if (going()) {
    // One whose npm was killed notices within a second and goes down; that one is waited for.
    await waitUntil(() => !going() || earlier().stopping, 1_800);
    if (going() && !earlier().stopping) {
      const { pid, url } = earlier();
      throw new SetupProblem(
        `Tallystone already runs from this data folder (process ${pid}${url ? `, ${url}` : ''}). Stop it first, or name another folder in TALLYSTONE_DATA.`,
      );
    }
    if (going()) say('Waiting for the previous run to end');
    if (!(await waitUntil(() => !going(), DRAIN_MS + 10_000)))
      throw new SetupProblem(`The previous run (process ${earlier().pid}) does not end. End it, then start again.`);
  }
  const left = () => (earlier().children ?? []).filter((pid) => runs(pid, path.join('server', 'main.js')));
  if (!(await waitUntil(() => left().length === 0, 3_000))) {
    say(`Ending ${left().length} process${left().length === 1 ? '' : 'es'} left by a run that was killed`);
    for (const signal of ['SIGTERM', 'SIGKILL']) {
      for (const pid of left()) process.kill(pid, signal);
      if (await waitUntil(() => left().length === 0, 5_000)) break;
    }
  }
}

// --- Going down -------------------------------------------------------------------------------------------------------

const state = {
  stopping: false,
  services: new Map(),
  programs: new Set(),
  data: undefined,
  runFile: undefined,
  ownPostgres: false,
  url: undefined,
};

function noteRun() {
  if (!state.runFile) return;
  const children = [...state.services.values()].map(({ child }) => child?.pid).filter(Boolean);
  writePrivately(state.runFile, `${JSON.stringify({ pid: process.pid, url: state.url, children, stopping: state.stopping })}\n`);
}

const track = (child) => {
  state.programs.add(child);
  child.once('close', () => state.programs.delete(child));
};

async function stop(exitCode, reason) {
  if (state.stopping) {
    // A second Ctrl-C: whoever presses it does not want to wait for open requests.
    for (const { child } of state.services.values()) child?.kill('SIGKILL');
    return;
  }
  state.stopping = true;
  if (reason) say(reason);
  try {
    noteRun();
    for (const child of state.programs) child.kill('SIGTERM');
    const open = [...state.services.values()]
      .map(({ child }) => child)
      .filter((child) => child && child.exitCode === null && child.signalCode === null);
    for (const child of open) child.kill('SIGTERM');
    const ended = () => open.every((child) => child.exitCode !== null || child.signalCode !== null);
    if (!(await waitUntil(ended, DRAIN_MS))) for (const child of open) child.kill('SIGKILL');
    if (state.ownPostgres) await stopPostgres({ data: state.data });
  } catch (error) {
    console.error(error instanceof SetupProblem ? error.message : error);
  }
  if (state.runFile) fs.rmSync(state.runFile, { force: true });
  process.exit(exitCode);
}

function parentOf(pid) {
  try {
    const text = fs.readFileSync(`/proc/${pid}/stat`, 'utf8');
    return {
      name: text.slice(text.indexOf('(') + 1, text.lastIndexOf(')')),
      parent: Number(text.slice(text.lastIndexOf(')') + 2).split(' ')[1]),
    };
  } catch {
    return undefined;
  }
}

/** npm hands a signal to its shell only, and a killed npm hands on nothing: so watch the processes between npm and this one. */
function watchParents() {
  if (!process.env.npm_lifecycle_event) return;
  const parent = process.ppid;
  const seen = parentOf(parent);
  const grandparent = seen && /^(sh|dash|bash|ash|zsh)$/.test(seen.name) ? seen.parent : undefined;
  const timer = setInterval(() => {
    const gone = process.ppid !== parent || (grandparent !== undefined && parentOf(parent)?.parent !== grandparent);
    if (!gone) return;
    clearInterval(timer);
    void stop(0, 'npm has ended; stopping');
  }, 1_000);
  timer.unref();
}

// --- Services ---------------------------------------------------------------------------------------------------------

function openLog(name) {
  const folder = path.join(state.data, 'logs');
  fs.mkdirSync(folder, { recursive: true, mode: 0o700 });
  const file = path.join(folder, `${name}.log`);
  if (fs.existsSync(file) && fs.statSync(file).size > 20 << 20) fs.renameSync(file, `${file}.1`);
  return { file, handle: fs.openSync(file, 'a', 0o600) };
}

const lastLines = (file, count) => fs.readFileSync(file, 'utf8').trimEnd().split('\n').slice(-count).join('\n');

/** Starts `main.js --services=<name>` and resolves when it says it is ready; one that ends later by itself is started again. */
function startService(name, env) {
  const service = { child: undefined, ends: [] };
  state.services.set(name, service);
  const launch = () =>
    new Promise((resolve, reject) => {
      const { file, handle } = openLog(name);
      const child = spawn(process.execPath, ['--enable-source-maps', path.join(SERVER, 'main.js'), `--services=${name}`], {
        cwd: ROOT,
        env,
        // A group of its own: Ctrl-C comes to this process alone, which then stops the services in order.
        detached: true,
        stdio: ['ignore', handle, handle, 'ipc'],
      });
      fs.closeSync(handle);
      service.child = child;
      noteRun();
      let ready = false;
      let said = '';
      const late = setTimeout(() => {
        said = `The ${name} service was not ready after 60 s`;
        child.kill('SIGKILL');
      }, 60_000);
      child.on('message', (message) => {
        if (message?.type === 'failed') said = String(message.message);
        if (message?.type !== 'ready') return;
        ready = true;
        clearTimeout(late);
        resolve(message);
      });
      child.once('error', (error) => reject(new SetupProblem(`The ${name} service did not start: ${error.message}`)));
      child.once('exit', (code, signal) => {
        clearTimeout(late);
        if (state.stopping) return;
        if (!ready) {
          reject(
            new SetupProblem(
              said ||
                `The ${name} service ended (${signal ?? `exit code ${code}`}) before it was ready. The end of ${file}:\n${lastLines(file, 15)}`,
            ),
          );
          return;
        }
        const now = Date.now();
        service.ends = [...service.ends.filter((time) => now - time < 60_000), now];
        console.error(`The ${name} service ended (${signal ?? `exit code ${code}`}); starting it again. Its log: ${file}`);
        if (service.ends.length > 5)
          void stop(1, `The ${name} service ended ${service.ends.length} times within a minute; giving up.`);
        else launch().catch((error) => stop(1, error.message));
      });
    });
  return launch();
}

/** Runs a command-line entry of the built server and returns its standard output. @throws {SetupProblem} with its last words when it fails */
async function runCli(name, env) {
  const entry = path.join(SERVER, 'cli', `${name}.js`);
  if (!fs.existsSync(entry)) throw new SetupProblem(`${entry} is missing from the build.`);
  const done = await runProgram(process.execPath, ['--enable-source-maps', entry], { env, onChild: track });
  if (done.code !== 0) throw new SetupProblem(`${name} failed:\n${done.output.trim().split('\n').slice(-20).join('\n')}`);
  return done.stdout;
}

function signInsOf(stdout) {
  const line = stdout.trim().split('\n').at(-1) ?? '';
  try {
    const { signIns } = JSON.parse(line);
    if (Array.isArray(signIns)) return signIns;
  } catch {
    // Falls through to the message below.
  }
  throw new SetupProblem(`The demo did not say how to sign in; it printed: ${line}`);
}

function printWelcome(url, demo, signIns, setUp) {
  const rows = signIns.map(({ role, email, password }) => [String(role), String(email), String(password)]);
  const width = (column) => Math.max(...rows.map((row) => row[column].length));
  say('');
  say(`Tallystone is ready after ${((Date.now() - began) / 1000).toFixed(1)} s:  ${url}`);
  if (rows.length > 0) {
    say('');
    say('Sign in (demo people of Saltmarsh Mutual, an invented lender):');
    for (const [role, email, password] of rows) say(`  ${role.padEnd(width(0))}  ${email.padEnd(width(1))}  ${password}`);
  }
  if (!demo && setUp) say(`Set up the first administrator once, here:  ${setUp}`);
  say('');
  say(`Data, keys and logs: ${state.data}    Ctrl-C stops it.`);
}

// --- The order of things ----------------------------------------------------------------------------------------------

async function main() {
  checkNode();
  const port = askedPort();
  const existing = existingServer();
  const demo = !/^(off|0|false|no)$/i.test(process.env.TALLYSTONE_DEMO ?? '');
  process.on('SIGINT', () => void stop(0, '\nStopping'));
  process.on('SIGTERM', () => void stop(0, 'Stopping'));
  process.on('SIGHUP', () => void stop(0, 'Stopping'));
  watchParents();

  let packages;
  if (!existing && !programsArePresent()) {
    await checkPort(port);
    // Begun first: apt-get holds this process up, and npm works on beside it. A failure is met where it is awaited.
    packages = ensurePackages({ say, onChild: track });
    packages.catch(() => {});
  }
  if (!existing) ensureProgramsFor(process.env.TALLYSTONE_DATA, { say });
  state.data = chooseDataFolder(!existing);
  makeDataFolder(state.data, !existing);
  const runFile = path.join(state.data, 'run.json');
  await takeOver(runFile);
  await checkPort(port);
  state.runFile = runFile;
  noteRun();

  const keys = ensureKeys(state.data);
  packages ??= ensurePackages({ say, onChild: track });
  const postgres = existing ? Promise.resolve(existing) : startPostgres({ data: state.data, say });
  // Known from here on, so that an early end stops it even while it is still starting.
  state.ownPostgres = !existing;
  const [, database] = await Promise.all([packages, postgres]);

  const env = {
    ...process.env,
    NODE_ENV: 'production',
    HOST,
    PORT: String(port),
    TALLYSTONE_DATA: state.data,
    DATABASE_URL: database.appUrl,
    TALLYSTONE_KEYS: keys,
    TALLYSTONE_DEMO: demo ? '1' : '',
    TALLYSTONE_WEB: path.join(ROOT, 'dist', 'web', 'browser'),
    TALLYSTONE_SERVER_DIST: SERVER,
  };
  // The running processes and the demo never learn the owner's password.
  delete env.DATABASE_OWNER_URL;

  const web = ensureBuilt('web', { say, onChild: track });
  const server = (async () => {
    await ensureBuilt('server', { say });
    await runCli('migrate', { ...env, DATABASE_OWNER_URL: database.ownerUrl });
    return demo ? signInsOf(await runCli('demo', env)) : [];
  })();
  const [, signIns] = await Promise.all([web, server]);

  const [ready] = await Promise.all([startService('web', env), startService('worker', env)]);
  state.url = ready.url ?? `http://${HOST}:${port}/`;
  noteRun();
  printWelcome(state.url, demo, signIns, ready.setUp);
}

main().catch(async (error) => {
  if (state.stopping) return;
  console.error(error instanceof SetupProblem ? error.message : error);
  await stop(1);
});
