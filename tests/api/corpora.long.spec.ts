import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { CorpusReader, generatedBytes, generatedTables, generatedTexts } from '../support/corpora';
import { IntakeServer } from '../support/intake';
import { type ServerProcess, killProcess, peakMemoryMiB, startServerProcess } from '../support/server-process';

/**
 * The generated files of corpora.spec.ts, 10,000 of all kinds together, through a real web process and a real worker: neither answers with a 500,
 * hangs, or takes more than 512 MB.
 */
let support: IntakeServer;
let web: ServerProcess;
let worker: ServerProcess;
let reader: CorpusReader;

beforeAll(async () => {
  support = await IntakeServer.start({ worker: false });
  web = await startServerProcess(support, 'web');
  worker = await startServerProcess(support, 'worker');
  reader = new CorpusReader(support, new URL(web.url).origin);
}, 120_000);
afterAll(async () => {
  const [webMemory, workerMemory] = [peakMemoryMiB(web.process), peakMemoryMiB(worker.process)];
  console.log(`10,000 files: web ${webMemory.toFixed(0)} MiB, worker ${workerMemory.toFixed(0)} MiB at most`);
  await killProcess(web.process);
  await killProcess(worker.process);
  await support.stop();
  expect(webMemory).toBeLessThan(512);
  expect(workerMemory).toBeLessThan(512);
});

describe('10,000 generated files through the API', { timeout: 40 * 60_000 }, () => {
  it('1,500 tables round trip', () => generatedTables(reader, 1500));
  it('2,500 texts of any characters end in problems or agree with csv-parse', async () => {
    expect(await generatedTexts(reader, 2500)).toBeGreaterThan(250);
  });
  it('6,000 of any bytes end in problems or data', () => generatedBytes(reader, 6000));
});
