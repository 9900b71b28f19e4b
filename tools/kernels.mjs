#!/usr/bin/env node
/**
 * Compiles the kernels from AssemblyScript and writes them as TypeScript modules, so that whatever reads TypeScript (the bundlers, tsx, vitest) finds
 * them: the solver's (libs/numeric/engine) and that of keyed hashes (server/src/profiling). The modules are committed; tests compile again and compare.
 *
 *   node tools/kernels.mjs
 */
import * as fs from 'node:fs';
import * as path from 'node:path';
import { fileURLToPath } from 'node:url';
import { ROOT } from './install.mjs';

const numeric = 'libs/numeric/engine/kernels';
const hashing = 'server/src/profiling/sha256';

/** The compiled module in base64. @throws with the compiler's messages */
async function compile(folder, source, more = []) {
  const { default: asc } = await import('assemblyscript/asc');
  const written = new Map();
  const { error, stderr } = await asc.main(
    [source, '--outFile', 'out.wasm', '-O3', '--runtime', 'stub', '--noAssert', '--importMemory', '--enable', 'simd', ...more],
    {
      readFile: (name) => {
        const file = path.join(ROOT, folder, name);
        return fs.existsSync(file) ? fs.readFileSync(file, 'utf8') : null;
      },
      writeFile: (name, contents) => void written.set(name, contents),
      listFiles: () => [],
    },
  );
  if (error) throw new Error(stderr.toString() || error.message);
  return Buffer.from(written.get('out.wasm')).toString('base64');
}

const lines = (text) =>
  text
    .match(/.{1,120}/g)
    .map((line) => `  '${line}',`)
    .join('\n');

/** The text of the solver's module. */
export async function kernelModule() {
  const most = ['--maximumMemory', '65536'];
  const shared = ['--sharedMemory', '--enable', 'threads'];
  return [
    '/** Written by tools/kernels.mjs from kernels.assembly.ts: the kernels in WebAssembly, base64. Not to be edited. */',
    `export const KERNELS = [\n${lines(await compile(numeric, 'kernels.assembly.ts', most))}\n].join('');`,
    '/** The same for memory that threads share. */',
    `export const SHARED_KERNELS = [\n${lines(await compile(numeric, 'kernels.assembly.ts', [...most, ...shared]))}\n].join('');`,
    '',
  ].join('\n');
}

/** The text of the module of keyed hashes. */
export async function hashModule() {
  return [
    '/** Written by tools/kernels.mjs from sha256.assembly.ts: the kernel in WebAssembly, base64. Not to be edited. */',
    `export const SHA256 = [\n${lines(await compile(hashing, 'sha256.assembly.ts'))}\n].join('');`,
    '',
  ].join('\n');
}

if (process.argv[1] && fs.realpathSync(process.argv[1]) === fileURLToPath(import.meta.url)) {
  fs.writeFileSync(path.join(ROOT, numeric, 'bytes.ts'), await kernelModule());
  fs.writeFileSync(path.join(ROOT, hashing, 'bytes.ts'), await hashModule());
}
