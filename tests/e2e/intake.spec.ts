import { createHash } from 'node:crypto';
import { writeFileSync } from 'node:fs';
import type { SampleList } from '@tallystone/contracts/samples/schema';
import { Client } from 'pg';
import { expect, signIn, test } from '../support/browser';
import { enterEmptyModel, post } from '../support/demo-places';
import { type Installation, install } from '../support/installation';

/**
 * An upload that is broken off because the web process dies: started again, the page opened anew and the same file chosen, it goes on from what the
 * server has, but not with another file of this name and size. On an installation of its own, so that nothing else loses its server.
 */
const piece = 8 * 1024 * 1024;
const account = { role: 'modeller', email: 'marian@saltmarsh.example', password: 'samphire-grows-on-the-marsh' };

let installation: Installation | undefined;
test.describe.configure({ timeout: 120_000 });
test.beforeAll(async () => {
  // Time for a build too, where this file runs alone.
  test.setTimeout(240_000);
  installation = await install({ demo: false });
});
test.afterAll(() => installation?.stop());

test('an upload goes on where it stopped when the web process was killed', async ({ browser }, testInfo) => {
  const line = 'SM-1000001,2024-03-01,some text that fills the line,0\n';
  const bytes = Buffer.from(`application_id,applied_on,words,bad\n${line.repeat(Math.ceil((2.6 * piece) / line.length))}`);
  const file = testInfo.outputPath('applicants.csv');
  writeFileSync(file, bytes);

  const server = installation;
  if (!server) throw new Error('Nothing is installed');
  const context = await browser.newContext({ baseURL: server.url });
  const page = await context.newPage();
  await page.goto('/sign-in');
  const token = /one-time token: ([^)]+)\)/.exec(server.setUp ?? '')?.[1];
  await post(page, '/api/set-up', { token, name: 'Marian', email: account.email, password: account.password });
  // There is no second admin who could give the first one this role.
  const owner = new Client({ connectionString: server.ownerUrl });
  await owner.connect();
  await owner.query(`INSERT INTO person_roles (person_id, role) SELECT id, 'modeller' FROM people`);
  await owner.end();
  await signIn(page, [account], 'modeller');
  const model = await enterEmptyModel(page, 'Credit cards');

  // At two megabytes a second the file takes ten seconds; the process dies once the first piece has been acknowledged.
  const network = await context.newCDPSession(page);
  await network.send('Network.emulateNetworkConditions', {
    offline: false,
    latency: 0,
    downloadThroughput: -1,
    uploadThroughput: 2 * 1024 * 1024,
  });
  await page.goto(`/models/${model.id}/sample`);
  await page.getByLabel('CSV file').setInputFiles(file);
  const bar = page.getByRole('progressbar', { name: 'Received' });
  await expect.poll(async () => Number(await bar.getAttribute('aria-valuenow')), { intervals: [100] }).toBeGreaterThan(45);
  await server.kill('web');
  await expect(page.getByText(/the connection is away and is tried again by itself/)).toBeVisible();
  await page.close();
  await server.start('web');

  const again = await context.newPage();
  const slow = await context.newCDPSession(again);
  await slow.send('Network.emulateNetworkConditions', {
    offline: false,
    latency: 0,
    downloadThroughput: -1,
    uploadThroughput: 4 * 1024 * 1024,
  });
  await again.goto(`/models/${model.id}/sample`);
  const between = (await (await again.request.get(`/api/models/${model.id}/samples`)).json()) as SampleList;
  expect(between.samples).toEqual([]);
  expect(between.uploads).toMatchObject([{ fileName: 'applicants.csv', size: bytes.length }]);
  const { offset } = between.uploads[0];
  expect(offset).toBeGreaterThanOrEqual(piece);
  expect(offset).toBeLessThan(bytes.length);
  await expect(again.getByRole('region', { name: 'Unfinished uploads' }).first()).toContainText('applicants.csv');
  await expect(again.getByRole('region', { name: 'Samples' })).toHaveCount(0);

  const sent: { method: string; offset: number }[] = [];
  again.on('request', (request) => {
    if (/\/uploads/.test(request.url()) && ['POST', 'PATCH'].includes(request.method()))
      sent.push({ method: request.method(), offset: Number(request.headers()['upload-offset']) });
  });
  // Changed meanwhile, at the same name and size: what has arrived is not of this file, and nothing of it is sent.
  const changed = Buffer.from(bytes);
  changed.write('2025-12-24', bytes.indexOf('2024-03-01', piece / 2));
  writeFileSync(file, changed);
  await again.getByLabel('CSV file').setInputFiles(file);
  await expect(again.getByRole('alert')).toContainText('What has arrived is not from this file as it is now');
  expect(sent).toEqual([]);
  await again.getByRole('button', { name: 'Leave it' }).click();
  await expect(again.getByRole('region', { name: 'Unfinished uploads' }).first()).toContainText('applicants.csv');

  writeFileSync(file, bytes);
  await again.getByLabel('CSV file').setInputFiles(file);
  await expect(again).toHaveURL(/\/reading$/, { timeout: 60_000 });
  // Nothing was begun anew: the first piece sent is the one after what had arrived.
  expect(sent[0]).toEqual({ method: 'PATCH', offset });
  expect(sent.every(({ method }) => method === 'PATCH')).toBe(true);
  const after = (await (await again.request.get(`/api/models/${model.id}/samples`)).json()) as SampleList;
  expect(after.uploads).toEqual([]);
  expect(after.samples).toMatchObject([{ size: bytes.length, sha256: createHash('sha256').update(bytes).digest('hex') }]);

  // And begun anew where that is what is meant: the file as it is now arrives, and nothing of the one before.
  await again.goto(`/models/${model.id}/sample`);
  await again.getByLabel('CSV file').setInputFiles(file);
  const secondBar = again.getByRole('progressbar', { name: 'Received' });
  await expect.poll(async () => Number(await secondBar.getAttribute('aria-valuenow')), { intervals: [20] }).toBeGreaterThan(45);
  await again.getByRole('button', { name: 'Stop for now' }).click();
  await expect(again.getByText(/stopped; what has arrived is kept/)).toBeVisible();
  await again.reload();
  await expect(again.getByRole('region', { name: 'Unfinished uploads' }).first()).toContainText('applicants.csv');
  writeFileSync(file, changed);
  await again.getByLabel('CSV file').setInputFiles(file);
  await again.getByRole('button', { name: 'Begin anew' }).click();
  await expect(again).toHaveURL(/\/reading$/, { timeout: 60_000 });
  const last = (await (await again.request.get(`/api/models/${model.id}/samples`)).json()) as SampleList;
  expect(last.uploads).toEqual([]);
  expect(last.samples.map(({ sha256 }) => sha256)).toEqual(
    [changed, bytes].map((one) => createHash('sha256').update(one).digest('hex')),
  );
  await context.close();
});
