#!/usr/bin/env node
/**
 * `npm test`: everything that has to hold, in one command, on a PostgreSQL of its own.
 *
 *   npm test                            all steps
 *   npm test -- --only lint,unit        some of them (lint, types, boundaries, build, web, unit, demo, e2e)
 *   npm test -- --only unit libs/numeric    and of the unit tests those whose path contains this
 *   npm run test:long                   with the long corpora (*.long.spec.ts)
 *
 * The last line of standard output is `N passed, N failed, N skipped`; the exit code is 0 only with no failure and no skip.
 */
import { spawn, spawnSync } from 'node:child_process';
import * as fs from 'node:fs';
import * as os from 'node:os';
import * as path from 'node:path';
import { findBrowser } from './browser.mjs';
import { specsUnder, steps } from './checks.mjs';
import { ROOT, checkNode, ensurePackages } from './install.mjs';
import { SetupProblem, aptInstall, barredFolder, canInstall, startPostgres, stopPostgres } from './postgres.mjs';

const LANES = 2;
const STEP_LIMIT_MINUTES = 15;

const began = Date.now();
const say = (line = '') => console.log(line);
const seconds = (from) => `${((Date.now() - from) / 1000).toFixed(0)} s`;
const children = new Set();
let postgresFolder;

// --- What is asked for ------------------------------------------------------------------------------------------------

function parse(args) {
  const asked = { only: undefined, long: false, filter: [] };
  for (let index = 0; index < args.length; index += 1) {
    const arg = args[index];
    if (arg === '--only') asked.only = (args[(index += 1)] ?? '').split(',').filter(Boolean);
    else if (arg.startsWith('--only=')) asked.only = arg.slice('--only='.length).split(',').filter(Boolean);
    else if (arg === '--long') asked.long = true;
    else if (arg.startsWith('-')) throw new SetupProblem(`npm test does not know ${arg}. It knows --only and --long.`);
    else asked.filter.push(arg);
  }
  return asked;
}

// --- What has to be there ---------------------------------------------------------------------------------------------

const works = (program, ...args) => spawnSync(program, args, { stdio: 'ignore' }).status === 0;

function missingPrograms() {
  const missing = [];
  if (!findBrowser()) missing.push('chromium-headless-shell');
  if (!works('pdftotext', '-v')) missing.push('poppler-utils');
  return missing;
}

/** Installs what the browser tests need from Debian's packages as root, or says what to install. */
function ensurePrograms() {
  const missing = missingPrograms();
  if (missing.length === 0) return;
  if (canInstall()) aptInstall(missing, say);
  const left = missingPrograms();
  if (left.length > 0)
    throw new SetupProblem(
      `The end-to-end tests need ${left.join(' and ')}. On Debian or Ubuntu: sudo apt-get install ${left.join(' ')}`,
    );
}

// --- A PostgreSQL for this run ----------------------------------------------------------------------------------------

const prefix = 'tallystone-test-server-';

function temporaryFolder() {
  return [os.tmpdir(), '/tmp', '/var/tmp'].find((folder) => fs.existsSync(folder) && !barredFolder(folder)) ?? os.tmpdir();
}

function alive(pid) {
  try {
    process.kill(pid, 0);
    return true;
  } catch (error) {
    return error.code === 'EPERM';
  }
}

/** A run that was killed leaves its server behind: the next one ends it. */
async function sweep(folder) {
  for (const name of fs.readdirSync(folder).filter((entry) => entry.startsWith(prefix))) {
    const pid = Number(name.slice(prefix.length));
    if (!pid || alive(pid)) continue;
    const data = path.join(folder, name);
    try {
      await stopPostgres({ data });
      fs.rmSync(data, { recursive: true, force: true });
    } catch {
      // It belongs to another account.
    }
  }
}

async function ownPostgres() {
  const folder = temporaryFolder();
  await sweep(folder);
  postgresFolder = path.join(folder, `${prefix}${process.pid}`);
  const server = await startPostgres({ data: postgresFolder, test: true, say });
  return { TALLYSTONE_TEST_APP_URL: server.appUrl, TALLYSTONE_TEST_OWNER_URL: server.ownerUrl };
}

async function cleanUp() {
  for (const child of children) {
    try {
      process.kill(-child.pid, 'SIGKILL');
    } catch {
      // Gone already.
    }
  }
  if (!postgresFolder) return;
  await stopPostgres({ data: postgresFolder });
  fs.rmSync(postgresFolder, { recursive: true, force: true });
}

// --- Running ----------------------------------------------------------------------------------------------------------

function runStep(step, env) {
  return new Promise((resolve) => {
    const [program, ...args] = step.command;
    // Colours are for terminals; a group of its own lets a step be ended with everything it started.
    const child = spawn(program, args, {
      cwd: ROOT,
      env: { ...process.env, CI: '1', NO_COLOR: '1', FORCE_COLOR: '0', ...env, ...step.env },
      stdio: ['ignore', 'pipe', 'pipe'],
      detached: true,
    });
    children.add(child);
    let output = '';
    const take = (chunk) => (output += chunk.toString());
    child.stdout.on('data', take);
    child.stderr.on('data', take);
    const minutes = step.limitMinutes ?? STEP_LIMIT_MINUTES;
    const limit = setTimeout(() => {
      output += `\nEnded after ${minutes} minutes.\n`;
      process.kill(-child.pid, 'SIGKILL');
    }, minutes * 60_000);
    const done = (code) => {
      clearTimeout(limit);
      children.delete(child);
      resolve({ code, output });
    };
    child.once('error', (error) => {
      output += error.message;
      done(127);
    });
    child.once('close', (code) => done(code ?? 1));
  });
}

function readReport(file) {
  try {
    return JSON.parse(fs.readFileSync(file, 'utf8'));
  } catch {
    return undefined;
  }
}

async function perform(step, env) {
  const from = Date.now();
  say(`── ${step.title} …`);
  const done = await runStep(step, env);
  const result = step.count(done, step.report ? readReport(step.report) : undefined);
  for (const folder of step.folders ?? []) {
    if (specsUnder(folder) > 0) continue;
    result.failed += 1;
    result.notes.push(`${folder} has no test`);
  }
  const good = result.failed === 0 && result.skipped === 0;
  say(`\n── ${step.title}: ${result.passed} passed, ${result.failed} failed, ${result.skipped} skipped (${seconds(from)})`);
  for (const note of result.notes) say(`   ${note}`);
  if (!good) say(done.output.trim());
  return result;
}

/** A step that builds on one that failed is not tried, and is not counted as anything but a failure. */
async function notRun(step, broken) {
  say(`\n── ${step.title}: not run, because of ${broken.join(', ')}`);
  return { passed: 0, failed: 1, skipped: 0, notes: [] };
}

/** Runs the steps in their order, side by side as far as the lanes reach; a step waits for those it comes after. */
async function performAll(list, env) {
  const results = new Map();
  const waiting = [...list];
  const names = new Set(list.map(({ name }) => name));
  let free = LANES;
  await new Promise((resolve, reject) => {
    const advance = () => {
      if (waiting.length === 0 && free === LANES) return resolve();
      while (waiting.length > 0) {
        const next = waiting.find(
          ({ slots, after = [] }) => slots <= free && after.every((name) => !names.has(name) || results.has(name)),
        );
        if (!next) return;
        waiting.splice(waiting.indexOf(next), 1);
        free -= next.slots;
        const broken = (next.after ?? []).filter((name) => results.get(name)?.failed > 0);
        const work = broken.length > 0 ? notRun(next, broken) : perform(next, env);
        work.then((result) => {
          results.set(next.name, result);
          free += next.slots;
          advance();
        }, reject);
      }
    };
    advance();
  });
  return [...results.values()];
}

async function main() {
  checkNode();
  const { only, long, filter } = parse(process.argv.slice(2));
  const work = fs.mkdtempSync(path.join(os.tmpdir(), 'tallystone-reports-'));
  const all = steps({ work, long, filter });
  const unknown = (only ?? []).filter((name) => !all.some((step) => step.name === name));
  if (unknown.length > 0)
    throw new SetupProblem(`There is no step ${unknown.join(', ')}; the steps are ${all.map(({ name }) => name).join(', ')}.`);
  const chosen = only ? all.filter(({ name }) => only.includes(name)) : all;

  await ensurePackages({ say });
  if (chosen.some(({ needs = [] }) => needs.includes('browser'))) ensurePrograms();
  const env = chosen.some(({ needs = [] }) => needs.includes('postgres')) ? await ownPostgres() : {};

  const results = await performAll(chosen, env);
  const sum = (what) => results.reduce((total, result) => total + result[what], 0);
  fs.rmSync(work, { recursive: true, force: true });
  await cleanUp();
  const [passed, failed, skipped] = [sum('passed'), sum('failed'), sum('skipped')];
  say(`\nAll steps took ${seconds(began)}.\n`);
  say(`${passed} passed, ${failed} failed, ${skipped} skipped`);
  process.exitCode = failed === 0 && skipped === 0 && passed > 0 ? 0 : 1;
}

for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) {
  process.on(signal, () => void cleanUp().finally(() => process.exit(130)));
}

main().catch(async (error) => {
  console.error(error instanceof SetupProblem ? error.message : error);
  await cleanUp().catch((problem) => console.error(problem));
  say('0 passed, 1 failed, 0 skipped');
  process.exit(1);
});
