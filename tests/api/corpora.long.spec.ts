import { readFileSync, writeFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { CorpusReader, generatedBytes, generatedTables, generatedTexts } from '../support/corpora';
import { IntakeServer } from '../support/intake';

/**
 * The generated files of corpora.spec.ts, 10,000 of all kinds together, on the way that every file takes, within 512 MB for server and worker, which
 * are this process. What counts is what comes on top of what it holds before: Linux forgets a process's peak when "5" is written to its
 * clear_refs (proc(5)).
 */
const mebibytes = (field: 'VmRSS' | 'VmHWM'): number =>
  Number(new RegExp(`${field}:\\s+(\\d+) kB`).exec(readFileSync('/proc/self/status', 'utf8'))?.[1]) / 1024;

let server: IntakeServer;
let reader: CorpusReader;
let before = NaN;

beforeAll(async () => {
  server = await IntakeServer.start();
  reader = new CorpusReader(server, await server.signIn('marian', 'modeller'));
  writeFileSync('/proc/self/clear_refs', '5');
  before = mebibytes('VmRSS');
});
afterAll(async () => {
  const most = mebibytes('VmHWM') - before;
  await server.stop();
  expect(most).toBeLessThan(512);
});

describe('10,000 generated files through the API', { timeout: 30 * 60_000 }, () => {
  it('1,500 tables round trip', () => generatedTables(reader, 1500));
  it('2,500 texts of any characters end in problems or agree with csv-parse', async () => {
    expect(await generatedTexts(reader, 2500)).toBeGreaterThan(250);
  });
  it('6,000 of any bytes end in problems or data', () => generatedBytes(reader, 6000));
});
