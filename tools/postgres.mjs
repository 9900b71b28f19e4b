#!/usr/bin/env node
/**
 * A PostgreSQL of Tallystone's own: initialised, started and stopped on loopback in a data folder of its own.
 *
 * Plain JavaScript on Node built-ins, because it runs before the npm packages are there. Used by tools/start.mjs,
 * tools/test.mjs and by hand:
 *
 *   node tools/postgres.mjs start|stop|status|url --data DIR [--test] [--port N]
 *
 * In DIR it keeps `postgres/` (the cluster) and `database.json` (random passwords and the port, readable by its owner only).
 * PostgreSQL refuses to run as root, so as root everything runs as the account `postgres`.
 */
import { execFile, spawn, spawnSync } from 'node:child_process';
import { randomBytes } from 'node:crypto';
import * as fs from 'node:fs';
import * as net from 'node:net';
import * as path from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { fileURLToPath } from 'node:url';

export const OWNER_ROLE = 'tallystone_owner';
export const APP_ROLE = 'tallystone_app';
export const DATABASE = 'tallystone';
const SUPERUSER = 'postgres';
const HOST = '127.0.0.1';
const PREFERRED_PORT = 54_329;
const OLDEST_VERSION = 14;

/** A condition the person at the keyboard can do something about: shown as one message, never as a stack. */
export class SetupProblem extends Error {
  constructor(message) {
    super(message);
    this.name = 'SetupProblem';
  }
}

const isRoot = () => typeof process.getuid === 'function' && process.getuid() === 0;

// --- Programs ---------------------------------------------------------------------------------------------------------

function majorOf(folder) {
  const answer = spawnSync(path.join(folder, 'postgres'), ['--version'], { encoding: 'utf8' });
  const match = /(\d+)(?:\.\d+)?/.exec(answer.stdout ?? '');
  return match ? Number(match[1]) : 0;
}

function candidateFolders() {
  const folders = [];
  const versions = '/usr/lib/postgresql';
  if (fs.existsSync(versions)) for (const name of fs.readdirSync(versions)) folders.push(path.join(versions, name, 'bin'));
  for (const root of ['/usr', '/opt/homebrew/opt', '/usr/local/opt']) {
    if (!fs.existsSync(root)) continue;
    for (const name of fs.readdirSync(root))
      if (/^(pgsql-|postgresql@)\d+$/.test(name)) folders.push(path.join(root, name, 'bin'));
  }
  const asked = spawnSync('pg_config', ['--bindir'], { encoding: 'utf8' });
  if (asked.status === 0) folders.push(asked.stdout.trim());
  for (const folder of (process.env.PATH ?? '').split(path.delimiter)) if (folder) folders.push(folder);
  return [...new Set(folders)].filter((folder) =>
    ['postgres', 'initdb', 'pg_ctl', 'psql'].every((name) => fs.existsSync(path.join(folder, name))),
  );
}

/** Folder of the PostgreSQL programs: the version the cluster was made with, or the newest one when there is no cluster yet. */
function findPrograms(wantedMajor) {
  const found = candidateFolders()
    .map((folder) => ({ folder, major: majorOf(folder) }))
    .filter(({ major }) => (wantedMajor ? major === wantedMajor : major >= OLDEST_VERSION))
    .sort((a, b) => b.major - a.major);
  return found[0]?.folder;
}

/** Installs packages of Debian, quietly; what apt-get said is shown on standard error when it failed. */
export function aptInstall(packages, say = () => {}) {
  const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' };
  const apt = (...args) => {
    const done = spawnSync('apt-get', args, { env, stdio: ['ignore', 'pipe', 'pipe'], encoding: 'utf8', maxBuffer: 1 << 26 });
    if (done.status !== 0) process.stderr.write(`apt-get ${args.join(' ')}:\n${done.stdout ?? ''}${done.stderr ?? ''}`);
    return done.status === 0;
  };
  say(`Installing ${packages.join(', ')} from Debian's packages`);
  apt('-qq', 'update');
  if (packages.includes('postgresql')) {
    // The package would also create and start a cluster nobody asked for; its own switch for that lives in this file.
    if (!apt('-qq', '-y', '--no-install-recommends', 'install', 'postgresql-common')) return false;
    const file = '/etc/postgresql-common/createcluster.conf';
    if (fs.existsSync(file)) {
      const text = fs.readFileSync(file, 'utf8');
      if (!/^\s*create_main_cluster\s*=/m.test(text)) fs.writeFileSync(file, `${text.trimEnd()}\ncreate_main_cluster = false\n`);
    }
  }
  return apt('-qq', '-y', '--no-install-recommends', 'install', ...packages);
}

export const canInstall = () => isRoot() && spawnSync('apt-get', ['--version'], { stdio: 'ignore' }).status === 0;

function programs(cluster, say) {
  const versionFile = path.join(cluster, 'PG_VERSION');
  const wanted = fs.existsSync(versionFile) ? Number(fs.readFileSync(versionFile, 'utf8').trim()) : 0;
  let folder = findPrograms(wanted);
  if (!folder && canInstall()) {
    aptInstall(wanted ? [`postgresql-${wanted}`, 'postgresql-common'] : ['postgresql'], say);
    folder = findPrograms(wanted);
  }
  if (folder) return folder;
  throw new SetupProblem(
    wanted
      ? `The database in ${cluster} was made by PostgreSQL ${wanted}, whose programs are not installed here. Install postgresql-${wanted}, or name an existing server in DATABASE_URL and DATABASE_OWNER_URL.`
      : `PostgreSQL ${OLDEST_VERSION} or newer is needed and was not found. On Debian or Ubuntu: sudo apt-get install postgresql; on Fedora: sudo dnf install postgresql-server; on macOS: brew install postgresql@16. Or name an existing server in DATABASE_URL and DATABASE_OWNER_URL.`,
  );
}

/** True when PostgreSQL's programs are on this machine. */
export const programsArePresent = () => candidateFolders().length > 0;

/**
 * Makes sure that PostgreSQL's programs are there, installing them as root.
 *
 * @param {string | undefined} data data folder, when it is known already: an existing cluster decides the version
 * @throws {SetupProblem} saying what to install
 */
export function ensureProgramsFor(data, { say = () => {} } = {}) {
  programs(places(data ?? '.').cluster, say);
}

// --- The account it runs as -------------------------------------------------------------------------------------------

/** As root: the ids of the account `postgres`. Otherwise nothing: PostgreSQL runs as whoever started this. */
function account() {
  if (!isRoot()) return undefined;
  const line = fs
    .readFileSync('/etc/passwd', 'utf8')
    .split('\n')
    .find((entry) => entry.startsWith(`${SUPERUSER}:`));
  if (!line)
    throw new SetupProblem(
      'PostgreSQL does not run as root and there is no account named "postgres" to run it as. Create one, or start as another user.',
    );
  const [, , uid, gid] = line.split(':');
  return { uid: Number(uid), gid: Number(gid) };
}

/** True when the account that runs PostgreSQL can enter this folder. As root that is the account `postgres`. */
export function canEnter(folder) {
  const ids = account();
  if (!ids) return true;
  return spawnSync('/bin/sh', ['-c', 'cd -- "$1"', 'sh', folder], { ...ids, cwd: '/', stdio: 'ignore' }).status === 0;
}

/** The outermost folder on the way to `folder` that the PostgreSQL account cannot enter, if there is one. Missing folders do not count. */
export function barredFolder(folder) {
  if (!isRoot() || !fs.readFileSync('/etc/passwd', 'utf8').includes(`\n${SUPERUSER}:`)) return undefined;
  const parts = path.resolve(folder).split(path.sep);
  for (let count = 2; count <= parts.length; count += 1) {
    const way = parts.slice(0, count).join(path.sep);
    if (!fs.existsSync(way)) return undefined;
    if (!canEnter(way)) return way;
  }
  return undefined;
}

/**
 * Makes the data folder, so that the account that runs PostgreSQL can pass through it when it will hold one.
 *
 * @throws {SetupProblem} when it cannot be made, entered or written, naming the folder that is in the way
 */
export function makeDataFolder(folder, withPostgres) {
  const barred = withPostgres ? barredFolder(folder) : undefined;
  if (barred) {
    if (!fs.statSync(barred).isDirectory())
      throw new SetupProblem(`The data folder ${folder} cannot be made: ${barred} is not a folder.`);
    throw new SetupProblem(
      `As root, PostgreSQL runs as the account "postgres", and that account cannot enter ${barred}. Choose another data folder, for example TALLYSTONE_DATA=/var/lib/tallystone, or allow it to pass with: chmod o+x ${barred}`,
    );
  }
  try {
    if (!fs.existsSync(folder)) {
      const first = fs.mkdirSync(folder, { recursive: true });
      // A strict umask would shut PostgreSQL out of what was made just now; only of that may the mode be changed.
      const made = path.relative(path.dirname(first), folder).split(path.sep);
      for (let count = 1; count <= made.length; count += 1) {
        fs.chmodSync(path.join(path.dirname(first), ...made.slice(0, count)), withPostgres && isRoot() ? 0o711 : 0o700);
      }
    }
    fs.accessSync(folder, fs.constants.R_OK | fs.constants.W_OK);
  } catch (error) {
    throw new SetupProblem(`The data folder ${folder} cannot be written by this account: ${error.message}`);
  }
}

function run(program, args, { input, env, ids, timeout = 120_000 } = {}) {
  return new Promise((resolve) => {
    const child = execFile(
      program,
      args,
      {
        ...ids,
        cwd: '/',
        timeout,
        maxBuffer: 1 << 26,
        env: { PATH: process.env.PATH, LANG: 'C.UTF-8', LC_ALL: 'C.UTF-8', ...env },
      },
      (error, stdout, stderr) => resolve({ ok: !error, stdout, stderr, reason: error ? (stderr || error.message).trim() : '' }),
    );
    child.stdin.on('error', () => {});
    child.stdin.end(input ?? '');
  });
}

// --- Places and secrets -----------------------------------------------------------------------------------------------

function places(data) {
  const folder = path.resolve(data);
  return {
    folder,
    cluster: path.join(folder, 'postgres'),
    half: path.join(folder, 'postgres.half-made'),
    secrets: path.join(folder, 'database.json'),
  };
}

/** Replaces a file whole: a reader, or a start after a crash, sees the old text or the new one and never a part. */
export function writePrivately(file, text) {
  const beside = `${file}.${process.pid}.part`;
  fs.writeFileSync(beside, text, { mode: 0o600 });
  fs.renameSync(beside, file);
}

function readSecrets(file) {
  try {
    const secrets = JSON.parse(fs.readFileSync(file, 'utf8'));
    return ['superuser', 'owner', 'app'].every((name) => typeof secrets[name] === 'string') ? secrets : undefined;
  } catch {
    return undefined;
  }
}

function urlsOf(secrets) {
  const url = (role, password, database) => `postgres://${role}:${password}@${HOST}:${secrets.port}/${database}`;
  return {
    port: secrets.port,
    appUrl: url(APP_ROLE, secrets.app, DATABASE),
    ownerUrl: url(OWNER_ROLE, secrets.owner, DATABASE),
    superuserUrl: url(SUPERUSER, secrets.superuser, 'postgres'),
  };
}

// --- Is it running, and what is left of a run that was killed ---------------------------------------------------------

function alive(pid) {
  try {
    process.kill(pid, 0);
    return true;
  } catch (error) {
    return error.code === 'EPERM';
  }
}

export function answers(port) {
  return new Promise((resolve) => {
    const socket = net.connect({ host: HOST, port });
    const end = (result) => {
      socket.destroy();
      resolve(result);
    };
    socket.setTimeout(2_000, () => end(false));
    socket.once('connect', () => end(true));
    socket.once('error', () => end(false));
  });
}

/** Every PostgreSQL process changes into its data folder, so the working folder tells whose it is. Linux only; elsewhere an empty list. */
function processesIn(cluster) {
  if (!fs.existsSync('/proc/self/cwd')) return [];
  return fs
    .readdirSync('/proc')
    .filter((name) => /^\d+$/.test(name))
    .filter((name) => {
      try {
        return (
          fs.readlinkSync(`/proc/${name}/cwd`) === cluster && /^postgres/.test(fs.readFileSync(`/proc/${name}/comm`, 'utf8'))
        );
      } catch {
        return false;
      }
    })
    .map(Number);
}

/** What postmaster.pid claims: first line the process, fourth line the port. */
function claimed(cluster) {
  try {
    const lines = fs.readFileSync(path.join(cluster, 'postmaster.pid'), 'utf8').split('\n');
    return { pid: Number(lines[0]), port: Number(lines[3]) };
  } catch {
    return undefined;
  }
}

/** The running server of this cluster, or nothing. A process id alone proves nothing after a kill: the port has to answer as well. */
async function running(cluster) {
  const claim = claimed(cluster);
  if (!claim || !claim.pid || !alive(claim.pid)) return undefined;
  if (fs.existsSync('/proc/self/cwd') && !processesIn(fs.realpathSync(cluster)).includes(claim.pid)) return undefined;
  return (await answers(claim.port)) ? claim : undefined;
}

/**
 * Clears what a killed server left: its backends, which go on holding the shared memory block and would make the new server
 * refuse to start, and a lock file whose process is gone or is by now some other program.
 */
async function clearRemains(cluster, say) {
  const real = fs.realpathSync(cluster);
  const claim = claimed(cluster);
  if (claim && processesIn(real).includes(claim.pid)) {
    // The server itself is there but does not answer: it may still be recovering from a crash, or be shutting down.
    for (let tries = 0; tries < 60 && processesIn(real).includes(claim.pid); tries += 1) {
      if (await answers(claim.port)) return;
      await sleep(250);
    }
  }
  for (const signal of [undefined, 'SIGQUIT', 'SIGKILL']) {
    const left = processesIn(real);
    if (left.length === 0) break;
    if (signal) {
      say(`Ending ${left.length} database process${left.length === 1 ? '' : 'es'} left by a server that was killed`);
      for (const pid of left) {
        try {
          process.kill(pid, signal);
        } catch {
          // It ended by itself in the meantime.
        }
      }
    }
    for (let tries = 0; tries < 20 && processesIn(real).length > 0; tries += 1) await sleep(100);
  }
  const after = claimed(cluster);
  if (after && !processesIn(real).includes(after.pid) && !(await answers(after.port)))
    fs.rmSync(path.join(cluster, 'postmaster.pid'), { force: true });
}

// --- Making and starting ----------------------------------------------------------------------------------------------

function freePort(wanted) {
  const attempt = (port) =>
    new Promise((resolve) => {
      const server = net.createServer();
      server.once('error', () => resolve(0));
      server.listen({ host: HOST, port, exclusive: true }, () => {
        const given = server.address().port;
        server.close(() => resolve(given));
      });
    });
  return attempt(wanted).then((port) => port || attempt(0));
}

function settings(test) {
  const lines = [
    `listen_addresses = '${HOST}'`,
    "unix_socket_directories = ''",
    'password_encryption = scram-sha-256',
    'shared_buffers = 256MB',
    'max_wal_size = 1GB',
    "timezone = 'UTC'",
    "log_timezone = 'UTC'",
    'jit = off',
    // Parallel plans need room in /dev/shm, which containers keep small.
    'max_parallel_workers_per_gather = 0',
    'max_parallel_maintenance_workers = 0',
    test ? 'max_connections = 250' : 'max_connections = 120',
  ];
  // A test database may be lost at any time, so it need not survive a power cut.
  if (test) lines.push('fsync = off', 'synchronous_commit = off', 'full_page_writes = off', 'autovacuum_naptime = 10min');
  return `${lines.join('\n')}\n`;
}

async function makeCluster(bin, { cluster, half }, secrets, ids, test) {
  fs.rmSync(half, { recursive: true, force: true });
  fs.mkdirSync(half, { mode: 0o700 });
  if (ids) fs.chownSync(half, ids.uid, ids.gid);
  const passwordFile = path.join(path.dirname(cluster), `.${randomBytes(6).toString('hex')}`);
  fs.writeFileSync(passwordFile, `${secrets.superuser}\n`, { mode: 0o600 });
  if (ids) fs.chownSync(passwordFile, ids.uid, ids.gid);
  try {
    const args = [
      '-D',
      half,
      '-E',
      'UTF8',
      '--locale=C.UTF-8',
      '-A',
      'scram-sha-256',
      '-U',
      SUPERUSER,
      `--pwfile=${passwordFile}`,
    ];
    if (test) args.push('--no-sync');
    let made = await run(path.join(bin, 'initdb'), args, { ids });
    if (!made.ok && /locale/i.test(made.reason)) {
      // C.UTF-8 is missing on some systems (macOS): C sorts the same way.
      fs.rmSync(half, { recursive: true, force: true });
      fs.mkdirSync(half, { mode: 0o700 });
      if (ids) fs.chownSync(half, ids.uid, ids.gid);
      made = await run(
        path.join(bin, 'initdb'),
        args.map((arg) => (arg === '--locale=C.UTF-8' ? '--locale=C' : arg)),
        { ids },
      );
    }
    if (!made.ok) throw new SetupProblem(`PostgreSQL could not create its data folder ${cluster}: ${made.reason}`);
  } finally {
    fs.rmSync(passwordFile, { force: true });
  }
  fs.appendFileSync(path.join(half, 'postgresql.conf'), `\n# Tallystone\ninclude_if_exists = 'tallystone.conf'\n`);
  // Only now does it count: a folder left by a killed initdb never carries the final name.
  fs.renameSync(half, cluster);
}

function startServer(bin, cluster, port, ids) {
  const log = path.join(cluster, 'server.log');
  if (fs.existsSync(log) && fs.statSync(log).size > 20 << 20) fs.truncateSync(log, 0);
  return new Promise((resolve) => {
    // Output must be ignored: the server inherits it and a pipe would never close.
    const child = spawn(
      path.join(bin, 'pg_ctl'),
      ['start', '-s', '-w', '-t', '60', '-D', cluster, '-l', log, '-o', `-p ${port}`],
      {
        ...ids,
        cwd: '/',
        stdio: 'ignore',
        env: { PATH: process.env.PATH, LANG: 'C.UTF-8', LC_ALL: 'C.UTF-8' },
      },
    );
    child.once('error', () => resolve(false));
    child.once('exit', (code) => resolve(code === 0));
  });
}

function lastLines(file, count = 12) {
  try {
    return fs.readFileSync(file, 'utf8').trimEnd().split('\n').slice(-count).join('\n');
  } catch {
    return '';
  }
}

async function ensureRoles(bin, secrets, test) {
  const role = (name, password, extra) => `
    SELECT 'CREATE ROLE ${name}' WHERE NOT EXISTS (SELECT FROM pg_roles WHERE rolname = '${name}') \\gexec
    ALTER ROLE ${name} LOGIN NOSUPERUSER NOCREATEROLE NOREPLICATION ${extra} PASSWORD '${password}';`;
  const sql = `
    SET log_min_error_statement = panic; SET log_statement = 'none'; SET client_min_messages = warning;
    ${role(OWNER_ROLE, secrets.owner, test ? 'CREATEDB' : 'NOCREATEDB')}
    ${role(APP_ROLE, secrets.app, 'NOCREATEDB')}
    SELECT 'CREATE DATABASE ${DATABASE} OWNER ${OWNER_ROLE}' WHERE NOT EXISTS (SELECT FROM pg_database WHERE datname = '${DATABASE}') \\gexec
    REVOKE ALL ON DATABASE ${DATABASE} FROM PUBLIC;
    GRANT CONNECT ON DATABASE ${DATABASE} TO ${APP_ROLE};
    \\connect ${DATABASE}
    REVOKE CREATE ON SCHEMA public FROM PUBLIC;
    GRANT USAGE ON SCHEMA public TO ${APP_ROLE};
    GRANT CREATE, USAGE ON SCHEMA public TO ${OWNER_ROLE};`;
  const env = { PGPASSWORD: secrets.superuser, PGCONNECT_TIMEOUT: '10' };
  const args = [
    '-h',
    HOST,
    '-p',
    String(secrets.port),
    '-U',
    SUPERUSER,
    '-d',
    'postgres',
    '-X',
    '-q',
    '-v',
    'ON_ERROR_STOP=1',
    '-f',
    '-',
  ];
  const done = await run(path.join(bin, 'psql'), args, { env, input: sql });
  if (!done.ok)
    throw new SetupProblem(`PostgreSQL runs on port ${secrets.port}, but its roles could not be set up: ${done.reason}`);
}

/** Runs `work` while no other process starts or makes the same cluster; a lock whose holder is gone is taken over. */
async function oneAtATime(lock, work) {
  const end = Date.now() + 180_000;
  for (;;) {
    try {
      fs.writeFileSync(lock, String(process.pid), { flag: 'wx', mode: 0o600 });
      break;
    } catch (error) {
      if (error.code !== 'EEXIST') throw error;
    }
    let holder = 0;
    try {
      holder = Number(fs.readFileSync(lock, 'utf8'));
      // Empty for the instant between its creation and the writing of the number.
      if (holder === 0 && Date.now() - fs.statSync(lock).mtimeMs < 2_000) holder = process.pid;
    } catch {
      continue;
    }
    if (!alive(holder) || Date.now() > end) fs.rmSync(lock, { force: true });
    else await sleep(50);
  }
  try {
    return await work();
  } finally {
    fs.rmSync(lock, { force: true });
  }
}

/**
 * Starts (or finds running) the PostgreSQL of a data folder and makes sure of its roles and database.
 *
 * @param {{ data: string, test?: boolean, port?: number, say?: (line: string) => void }} options
 *   `test` trades safety for speed and lets the owner role create databases.
 * @returns {Promise<{ port: number, appUrl: string, ownerUrl: string, superuserUrl: string, alreadyRunning: boolean }>}
 * @throws {SetupProblem} with a message for the person at the keyboard
 * @example const { appUrl, ownerUrl } = await startPostgres({ data: '.tallystone' });
 */
export async function startPostgres({ data, test = false, port, say = () => {} }) {
  const at = places(data);
  // Programs first: installing them is what makes the account that the folder has to be passable for.
  const bin = programs(at.cluster, say);
  makeDataFolder(at.folder, true);
  return oneAtATime(path.join(at.folder, 'starting.lock'), () => startAlone(at, bin, { test, port, say }));
}

async function startAlone(at, bin, { test, port, say }) {
  const ids = account();
  let secrets = readSecrets(at.secrets);
  const exists = fs.existsSync(path.join(at.cluster, 'PG_VERSION'));
  if (exists && !secrets) {
    throw new SetupProblem(
      `${at.cluster} holds a database, but ${at.secrets} with its passwords is missing or unreadable. Bring the file back from a backup, or move the folder away to start afresh.`,
    );
  }
  if (exists && !ids && fs.statSync(at.cluster).uid !== process.getuid?.()) {
    throw new SetupProblem(
      `The database in ${at.cluster} belongs to another account. Start as that account (or as root), or choose another data folder with TALLYSTONE_DATA.`,
    );
  }
  if (!secrets) {
    const password = () => randomBytes(24).toString('hex');
    secrets = { superuser: password(), owner: password(), app: password(), port: port ?? PREFERRED_PORT };
    writePrivately(at.secrets, `${JSON.stringify(secrets, null, 2)}\n`);
  }
  if (!exists) await makeCluster(bin, at, secrets, ids, test);

  const conf = path.join(at.cluster, 'tallystone.conf');
  fs.writeFileSync(conf, settings(test));
  if (ids) fs.chownSync(conf, ids.uid, ids.gid);

  let server = await running(at.cluster);
  const alreadyRunning = Boolean(server);
  for (let attempt = 1; !server && attempt <= 3; attempt += 1) {
    await clearRemains(at.cluster, say);
    server = await running(at.cluster);
    if (server) break;
    const chosen = await freePort(port ?? secrets.port);
    if (await startServer(bin, at.cluster, chosen, ids)) server = await running(at.cluster);
    else await sleep(500 * attempt);
  }
  if (!server)
    throw new SetupProblem(
      `PostgreSQL did not start in ${at.cluster}. Its log ends with:\n${lastLines(path.join(at.cluster, 'server.log'))}`,
    );

  if (server.port !== secrets.port) {
    secrets = { ...secrets, port: server.port };
    writePrivately(at.secrets, `${JSON.stringify(secrets, null, 2)}\n`);
  }
  await ensureRoles(bin, secrets, test);
  return { ...urlsOf(secrets), alreadyRunning };
}

/** Stops the PostgreSQL of a data folder; open transactions are rolled back. Resolves to false when none was running. */
export async function stopPostgres({ data, say = () => {} }) {
  const { cluster } = places(data);
  if (!fs.existsSync(path.join(cluster, 'PG_VERSION')) || !(await running(cluster))) return false;
  const bin = programs(cluster, say);
  const stopped = await run(path.join(bin, 'pg_ctl'), ['stop', '-s', '-w', '-t', '60', '-m', 'fast', '-D', cluster], {
    ids: account(),
  });
  if (!stopped.ok) throw new SetupProblem(`PostgreSQL in ${cluster} did not stop: ${stopped.reason}`);
  return true;
}

/** Addresses of a data folder's database as last started, and whether a server answers there. */
export async function postgresStatus({ data }) {
  const at = places(data);
  const secrets = readSecrets(at.secrets);
  const server = fs.existsSync(at.cluster) ? await running(at.cluster) : undefined;
  return { running: Boolean(server), ...(secrets ? urlsOf({ ...secrets, port: server?.port ?? secrets.port }) : {}) };
}

// --- By hand ----------------------------------------------------------------------------------------------------------

async function main() {
  const [command, ...rest] = process.argv.slice(2);
  const option = (name) => (rest.includes(name) ? rest[rest.indexOf(name) + 1] : undefined);
  const data = option('--data');
  if (!['start', 'stop', 'status', 'url'].includes(command) || !data) {
    console.error('Usage: node tools/postgres.mjs start|stop|status|url --data DIR [--test] [--port N]');
    process.exitCode = 2;
    return;
  }
  const say = (line) => console.error(line);
  const print = ({ appUrl, ownerUrl }) => console.log(`DATABASE_URL=${appUrl}\nDATABASE_OWNER_URL=${ownerUrl}`);
  if (command === 'start') {
    const port = option('--port');
    print(await startPostgres({ data, test: rest.includes('--test'), port: port ? Number(port) : undefined, say }));
  } else if (command === 'stop') {
    console.log((await stopPostgres({ data, say })) ? 'stopped' : 'not running');
  } else {
    const status = await postgresStatus({ data });
    if (command === 'status') console.log(status.running ? `running on port ${status.port}` : 'not running');
    else if (status.appUrl) print(status);
    if (!status.running) process.exitCode = command === 'status' ? 3 : status.appUrl ? 0 : 1;
  }
}

if (process.argv[1] && fs.realpathSync(process.argv[1]) === fileURLToPath(import.meta.url)) {
  main().catch((error) => {
    console.error(error instanceof SetupProblem ? error.message : error);
    process.exit(1);
  });
}
