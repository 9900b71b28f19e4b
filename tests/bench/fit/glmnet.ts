import { execFileSync, spawnSync } from 'node:child_process';
import { mkdtempSync, openSync, readFileSync, rmSync, writeFileSync, writeSync, closeSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { BenchCase } from './cases';
import type { BenchSample } from './sample';

export interface GlmnetTimes {
  readonly path: { readonly seconds: number; readonly cpu: number; readonly residual: number };
  /** The residual is that of the first fold. */
  readonly cv: { readonly seconds: number; readonly cpu: number; readonly residual: number } | null;
  readonly peakMemoryMB: number;
  readonly lambdas: Float64Array;
  readonly deviances: Float64Array;
}

export function hasGlmnet(): boolean {
  return spawnSync('Rscript', ['-e', 'library(glmnet)'], { stdio: 'ignore' }).status === 0;
}

/** glmnet at its defaults on the same sample, in a process of its own. */
export function timeGlmnet(of: BenchCase, sample: BenchSample, parts: 'path' | 'cv'): GlmnetTimes {
  const folder = mkdtempSync(join(tmpdir(), 'bench-fit-'));
  try {
    const codes = openSync(join(folder, 'codes'), 'w');
    for (const column of sample.columns) writeSync(codes, column.codes);
    closeSync(codes);
    const values = new Float64Array(256 * sample.columns.length);
    sample.columns.forEach((column, j) => values.set(column.values, 256 * j));
    writeFileSync(join(folder, 'values'), values);
    writeFileSync(join(folder, 'outcome'), sample.outcome);
    writeFileSync(join(folder, 'folds'), sample.folds);
    const script = fileURLToPath(new URL('./glmnet.R', import.meta.url));
    const args = [script, folder, String(of.rows), String(of.columns), String(of.mixing), parts];
    const printed = execFileSync('Rscript', args, { encoding: 'utf8', maxBuffer: 1 << 24 });
    const doubles = (name: string): Float64Array => {
      const bytes = readFileSync(join(folder, name));
      return new Float64Array(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.byteLength));
    };
    const found = JSON.parse(printed.trim().split('\n').at(-1) ?? '') as Omit<GlmnetTimes, 'lambdas' | 'deviances'>;
    return { ...found, lambdas: doubles('lambda'), deviances: doubles('deviance') };
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}
