#!/usr/bin/env node
/**
 * Compiles the kernels of libs/numeric/engine from AssemblyScript and writes them as a TypeScript module, so that whatever reads TypeScript
 * (the bundlers, tsx, vitest) finds them. The module is committed; a test compiles again and compares.
 *
 *   node tools/kernels.mjs
 */
import * as fs from 'node:fs';
import * as path from 'node:path';
import { fileURLToPath } from 'node:url';
import { ROOT } from './install.mjs';

const folder = path.join(ROOT, 'libs/numeric/engine/kernels');

/** The text of the module. @throws with the compiler's messages */
export async function kernelModule() {
  const { default: asc } = await import('assemblyscript/asc');
  const compile = async (...more) => {
    const written = new Map();
    const { error, stderr } = await asc.main(
      [
        'kernels.assembly.ts',
        '--outFile',
        'out.wasm',
        '-O3',
        '--runtime',
        'stub',
        '--noAssert',
        '--importMemory',
        '--enable',
        'simd',
        '--maximumMemory',
        '65536',
        ...more,
      ],
      {
        readFile: (name) => (fs.existsSync(path.join(folder, name)) ? fs.readFileSync(path.join(folder, name), 'utf8') : null),
        writeFile: (name, contents) => void written.set(name, contents),
        listFiles: () => [],
      },
    );
    if (error) throw new Error(stderr.toString() || error.message);
    return Buffer.from(written.get('out.wasm')).toString('base64');
  };
  const lines = (text) =>
    text
      .match(/.{1,120}/g)
      .map((line) => `  '${line}',`)
      .join('\n');
  return [
    '/** Written by tools/kernels.mjs from kernels.assembly.ts: the kernels in WebAssembly, base64. Not to be edited. */',
    `export const KERNELS = [\n${lines(await compile())}\n].join('');`,
    '/** The same for memory that threads share. */',
    `export const SHARED_KERNELS = [\n${lines(await compile('--sharedMemory', '--enable', 'threads'))}\n].join('');`,
    '',
  ].join('\n');
}

if (process.argv[1] && fs.realpathSync(process.argv[1]) === fileURLToPath(import.meta.url)) {
  fs.writeFileSync(path.join(folder, 'bytes.ts'), await kernelModule());
}
