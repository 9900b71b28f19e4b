#!/usr/bin/env node
/**
 * Builds the server (esbuild) and the client (Angular) into dist/, only when their sources changed.
 *
 *   node tools/build.mjs [server] [web] [--force]
 */
import { createHash } from 'node:crypto';
import * as fs from 'node:fs';
import * as path from 'node:path';
import { fileURLToPath } from 'node:url';
import { ROOT, ensurePackages, runProgram } from './install.mjs';
import { SetupProblem } from './postgres.mjs';

const at = (...parts) => path.join(ROOT, ...parts);

const PARTS = {
  server: {
    sources: ['server/src', 'libs', 'package-lock.json', 'tsconfig.json', 'tools/build.mjs'],
    result: 'dist/server/main.js',
    build: buildServer,
  },
  web: {
    sources: ['apps/web', 'libs', 'angular.json', 'package-lock.json', 'tsconfig.json'],
    result: 'dist/web/browser/index.html',
    build: buildWeb,
  },
};

function filesUnder(relative) {
  const absolute = at(relative);
  if (!fs.existsSync(absolute)) return [];
  if (!fs.statSync(absolute).isDirectory()) return [relative];
  return fs
    .readdirSync(absolute, { withFileTypes: true })
    .filter((entry) => entry.name !== 'node_modules' && !entry.name.startsWith('.'))
    .flatMap((entry) => filesUnder(path.join(relative, entry.name)));
}

/** SHA-256 over names and contents: what the result was made of. Specs do not take part in it. */
function stampOf(sources) {
  const hash = createHash('sha256').update(process.versions.node.split('.')[0]);
  for (const file of sources
    .flatMap(filesUnder)
    .filter((name) => !name.endsWith('.spec.ts'))
    .sort()) {
    hash.update(`\0${file}\0`).update(fs.readFileSync(at(file)));
  }
  return hash.digest('hex');
}

const stampFile = (part) => at('dist', `${part}.stamp`);

/** True when the part lies in dist/ and was built from the sources as they are now. */
export function isBuilt(part) {
  const { sources, result } = PARTS[part];
  if (!fs.existsSync(at(result)) || !fs.existsSync(stampFile(part))) return false;
  return fs.readFileSync(stampFile(part), 'utf8') === stampOf(sources);
}

/**
 * Builds one part, 'server' or 'web', unless it is built already.
 *
 * @returns {Promise<boolean>} whether it was built now
 * @throws {SetupProblem} with the compiler's messages
 */
export async function ensureBuilt(part, { say = () => {}, force = false, onChild } = {}) {
  if (!force && isBuilt(part)) return false;
  say(`Building the ${part === 'web' ? 'client' : 'server'}`);
  // Taken before the build, so that a file changed meanwhile leads to another one; removed first, so that a broken build does not count.
  const stamp = stampOf(PARTS[part].sources);
  fs.rmSync(stampFile(part), { force: true });
  await PARTS[part].build(onChild);
  fs.writeFileSync(stampFile(part), stamp);
  return true;
}

/** Compiles server entries into dist/server. */
async function bundle(entries, options) {
  const { build } = await import('esbuild');
  await build({
    absWorkingDir: ROOT,
    entryPoints: entries,
    outdir: 'dist/server',
    outbase: 'server/src',
    platform: 'node',
    format: 'esm',
    target: 'node20',
    bundle: true,
    splitting: true,
    sourcemap: 'linked',
    tsconfig: 'tsconfig.json',
    logLevel: 'silent',
    ...options,
  });
}

async function buildServer() {
  const cli = filesUnder('server/src/cli').filter((file) => file.endsWith('.ts') && !file.endsWith('.spec.ts'));
  const threads = filesUnder('server/src/threads').filter((file) => file.endsWith('entry.ts'));
  fs.rmSync(at('dist/server'), { recursive: true, force: true });
  try {
    await bundle(['server/src/main.ts', ...cli], { packages: 'external' });
    // A thread is started for work, and again after work that was cancelled: with its packages in a few files it starts in half of the time that
    // looking for hundreds of them takes. Packages in CommonJS ask for parts of Node.js by `require`, which a module does not have.
    await bundle(threads, {
      chunkNames: 'threads/[name]-[hash]',
      banner: { js: `import { createRequire } from 'node:module'; const require = createRequire(import.meta.url);` },
    });
  } catch (error) {
    const messages = (error.errors ?? []).map(
      ({ text, location }) => `${location ? `${location.file}:${location.line}: ` : ''}${text}`,
    );
    throw new SetupProblem(`The server does not build:\n${messages.join('\n') || error.message}`);
  }
}

async function buildWeb(onChild) {
  const ng = at('node_modules/@angular/cli/bin/ng.js');
  const done = await runProgram(process.execPath, [ng, 'build', '--progress=false'], {
    env: { NG_CLI_ANALYTICS: 'false', CI: '1' },
    onChild,
  });
  if (done.code !== 0) throw new SetupProblem(`The client does not build:\n${done.output.trim()}`);
}

if (process.argv[1] && fs.realpathSync(process.argv[1]) === fileURLToPath(import.meta.url)) {
  const args = process.argv.slice(2);
  const asked = args.filter((arg) => arg in PARTS);
  const say = (line) => console.error(line);
  try {
    await ensurePackages({ say });
    for (const part of asked.length > 0 ? asked : ['server', 'web'])
      await ensureBuilt(part, { say, force: args.includes('--force') });
  } catch (error) {
    console.error(error instanceof SetupProblem ? error.message : error);
    process.exitCode = 1;
  }
}
