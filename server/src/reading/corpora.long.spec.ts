import { readFileSync, writeFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect } from 'vitest';
import { testGeneratedFiles } from './testing/generated-files';

/**
 * The generated files of corpora.spec.ts, 10,000 of each kind, within 512 MB for all of them. Other specs run in this process before it, so what counts is what
 * comes on top of what they left: Linux forgets a process's peak when "5" is written to its clear_refs (proc(5)).
 */
const mebibytes = (field: 'VmRSS' | 'VmHWM'): number =>
  Number(new RegExp(`${field}:\\s+(\\d+) kB`).exec(readFileSync('/proc/self/status', 'utf8'))?.[1]) / 1024;

let before = NaN;
beforeAll(() => {
  writeFileSync('/proc/self/clear_refs', '5');
  before = mebibytes('VmRSS');
});
afterAll(() => expect(mebibytes('VmHWM') - before).toBeLessThan(512));

describe('10,000 generated files of each kind', { timeout: 20 * 60_000 }, () => testGeneratedFiles(10_000));
