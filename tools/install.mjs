/**
 * npm packages: there, of the versions of the lock file, or installed now. Node built-ins only.
 */
import { spawn } from 'node:child_process';
import * as fs from 'node:fs';
import * as path from 'node:path';
import { fileURLToPath } from 'node:url';
import { SetupProblem } from './postgres.mjs';

/** The project's folder. */
export const ROOT = path.resolve(path.dirname(fileURLToPath(import.meta.url)), '..');

const OLDEST_NODE = [20, 19];

/** @throws {SetupProblem} when this Node.js is older than the project supports */
export function checkNode() {
  const [major, minor] = process.versions.node.split('.').map(Number);
  if (major > OLDEST_NODE[0] || (major === OLDEST_NODE[0] && minor >= OLDEST_NODE[1])) return;
  throw new SetupProblem(`Node.js ${OLDEST_NODE.join('.')} or newer is needed (20, 22 or 24); this is ${process.version}.`);
}

/**
 * True when node_modules holds what package-lock.json asks for. npm writes the hidden lock file at the end of an installation,
 * so an interrupted one is found as well, and an installation made by hand is not made again.
 */
export function packagesAreCurrent(root = ROOT) {
  let wanted, present;
  try {
    wanted = JSON.parse(fs.readFileSync(path.join(root, 'package-lock.json'), 'utf8')).packages;
    present = JSON.parse(fs.readFileSync(path.join(root, 'node_modules', '.package-lock.json'), 'utf8')).packages;
  } catch {
    return false;
  }
  return Object.entries(wanted).every(([place, entry]) => {
    if (place === '' || entry.link) return true;
    const installed = present[place];
    // Packages for other platforms are in the lock file and are rightly absent here.
    if (!installed) return Boolean(entry.optional || entry.devOptional || entry.peer);
    return installed.version === entry.version;
  });
}

/**
 * Runs a program and resolves with its exit code and everything it printed.
 *
 * @param {string} program
 * @param {string[]} args
 * @param {{ env?: Record<string, string>, cwd?: string, echo?: boolean, onChild?: (child: import('node:child_process').ChildProcess) => void }} options
 *   `echo` also passes the output on to standard error as it comes
 */
export function runProgram(program, args, { env, cwd = ROOT, echo = false, onChild } = {}) {
  return new Promise((resolve) => {
    const child = spawn(program, args, { cwd, env: { ...process.env, ...env }, stdio: ['ignore', 'pipe', 'pipe'] });
    onChild?.(child);
    let stdout = '';
    let output = '';
    const take = (chunk, standard) => {
      const text = chunk.toString();
      if (standard) stdout += text;
      output += text;
      if (echo) process.stderr.write(text);
    };
    child.stdout.on('data', (chunk) => take(chunk, true));
    child.stderr.on('data', (chunk) => take(chunk, false));
    child.once('error', (error) => resolve({ code: 127, stdout, output: `${output}${error.message}\n` }));
    child.once('close', (code, signal) => resolve({ code: code ?? 1, signal, stdout, output }));
  });
}

/** Installs the npm packages of the lock file unless they are there. @throws {SetupProblem} with npm's own words when that fails */
export async function ensurePackages({ say = () => {}, onChild } = {}) {
  checkNode();
  if (packagesAreCurrent()) return false;
  say('Installing the npm packages of the lock file (about a minute)');
  const windows = process.platform === 'win32';
  const done = await runProgram(windows ? 'npm.cmd' : 'npm', ['ci', '--no-audit', '--no-fund', '--loglevel=error'], { onChild });
  if (done.code !== 0) throw new SetupProblem(`npm ci failed:\n${done.output.trim().split('\n').slice(-20).join('\n')}`);
  return true;
}
