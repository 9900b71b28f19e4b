#!/usr/bin/env node
/**
 * Runs a command-line entry of the server from its sources' current build: `node tools/run.mjs replicate --specification …`.
 * Standard output, standard error and the exit code are the entry's own.
 */
import { spawn } from 'node:child_process';
import * as fs from 'node:fs';
import * as path from 'node:path';
import { ensureBuilt } from './build.mjs';
import { ROOT, ensurePackages } from './install.mjs';
import { SetupProblem } from './postgres.mjs';

const [name, ...args] = process.argv.slice(2);
const say = (line) => console.error(line);

try {
  if (!name || !/^[a-z-]+$/.test(name))
    throw new SetupProblem('Usage: node tools/run.mjs NAME [arguments]; names are the files of server/src/cli.');
  await ensurePackages({ say });
  await ensureBuilt('server', { say });
  const entry = path.join(ROOT, 'dist', 'server', 'cli', `${name}.js`);
  if (!fs.existsSync(entry)) throw new SetupProblem(`There is no command "${name}".`);
  // npm changes into the project; file names are meant from where the command was typed.
  const child = spawn(process.execPath, ['--enable-source-maps', entry, ...args], {
    cwd: process.env.INIT_CWD ?? process.cwd(),
    stdio: 'inherit',
  });
  for (const signal of ['SIGINT', 'SIGTERM']) process.on(signal, () => child.kill(signal));
  child.once('exit', (code) => process.exit(code ?? 1));
} catch (error) {
  console.error(error instanceof SetupProblem ? error.message : error);
  process.exitCode = 1;
}
