#!/usr/bin/env node
/**
 * `npm run check:reference -- [--data FOLDER] [--seed N]`: the numbers against R with glmnet and pROC on data drawn afresh, and against reference fits
 * whose data may not be passed on (FOLDER holds them). Prints a table; ends with exit code 1 when a line of it fails.
 *
 * R comes from Debian's packages when this runs as root; otherwise it says what to install. scikit-learn is compared with where it is.
 */
import { spawn, spawnSync } from 'node:child_process';
import * as path from 'node:path';
import { ROOT, checkNode, ensurePackages } from './install.mjs';
import { SetupProblem, aptInstall, canInstall } from './postgres.mjs';

const R_PACKAGES = ['r-base-core', 'r-cran-glmnet', 'r-cran-proc'];
const say = (line) => console.error(line);
const hasR = () => spawnSync('Rscript', ['-e', 'library(glmnet); library(pROC)'], { stdio: 'ignore' }).status === 0;

function ensureR() {
  if (hasR()) return;
  if (canInstall()) aptInstall(R_PACKAGES, say);
  if (!hasR())
    throw new SetupProblem(
      `This check needs R with glmnet and pROC. On Debian or Ubuntu: sudo apt-get install ${R_PACKAGES.join(' ')} (and python3-sklearn for scikit-learn)`,
    );
}

try {
  checkNode();
  await ensurePackages({ say });
  ensureR();
  const tsx = path.join(ROOT, 'node_modules', 'tsx', 'dist', 'cli.mjs');
  const main = path.join(ROOT, 'tests', 'reference', 'check', 'main.ts');
  // Aliases of imports are those of the project's own folder; names of files are meant from where the command was typed.
  const env = { ...process.env, INIT_CWD: process.env.INIT_CWD ?? process.cwd() };
  const child = spawn(process.execPath, [tsx, main, ...process.argv.slice(2)], { cwd: ROOT, env, stdio: 'inherit' });
  for (const signal of ['SIGINT', 'SIGTERM']) process.on(signal, () => child.kill(signal));
  child.once('exit', (code) => process.exit(code ?? 1));
} catch (error) {
  console.error(error instanceof SetupProblem ? error.message : error);
  process.exitCode = 1;
}
