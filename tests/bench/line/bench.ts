/**
 * Takes a large file down the whole line, as a modeller and a validator do, and says how long each step was waited for: through the built product's API, a
 * web process and one worker, on a PostgreSQL of its own with the settings that `npm start` gives it.
 *
 *   npm run bench:line -- --rows 1000000 --columns 100          in words
 *   npm run bench:line -- --rows 1000000 --columns 100 --json   one JSON object on standard output
 *   ... --indeterminate 0.08   a share of the rows is neither good nor bad: every fit is made again with them as good and as bad
 *   ... --profile DIR   CPU profiles of the worker's threads
 */
import { chmodSync, mkdtempSync, rmSync, statSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { parseArgs } from 'node:util';
import supertest from 'supertest';
import type { CharacteristicSummary } from '@tallystone/contracts/binnings/schema';
import type { DraftContent } from '@tallystone/contracts/samples/definition';
import type { FitPath } from '@tallystone/contracts/fits/schema';
import type { Run } from '@tallystone/contracts/runs/schema';
import { ensureBuilt } from '../../../tools/build.mjs';
import { startPostgres, stopPostgres } from '../../../tools/postgres.mjs';
import { Visitor } from '../../support/intake';
import { act, choose, freeze, key, scale, writeTexts } from '../../support/line';
import { timeReclassing } from '../../support/reclassing';
import { peakMemoryMiB } from '../../support/server-process';
import { endService, prepareProduct, startService, uploadFile } from '../product';
import { writeLineFile } from './file';

const { values: given } = parseArgs({
  options: {
    rows: { type: 'string', default: '1000000' },
    columns: { type: 'string', default: '100' },
    indeterminate: { type: 'string', default: '0' },
    json: { type: 'boolean', default: false },
    profile: { type: 'string' },
  },
});
const rows = Number(given.rows);
const columns = Number(given.columns);
const indeterminate = Number(given.indeterminate);
const say = (line: string): void => console.error(line);
/** Minutes that a run is waited for. */
const PATIENCE_MS = 20 * 60_000;

const steps: Record<string, number> = {};
async function timed<Value>(step: string, work: () => Promise<Value>): Promise<Value> {
  const began = performance.now();
  const value = await work();
  steps[step] = (performance.now() - began) / 1000;
  say(`${step.padEnd(28)} ${steps[step].toFixed(2)} s`);
  return value;
}

await ensureBuilt('server', { say });
const folder = mkdtempSync(join(tmpdir(), 'tallystone-bench-'));
chmodSync(folder, 0o755);
try {
  const path = join(folder, 'applications.csv');
  const sha256 = writeLineFile(path, rows, columns, indeterminate);
  const { size: bytes } = statSync(path);
  say(`${rows} rows, ${columns} columns, ${(bytes / 1e6).toFixed(1)} MB`);
  const data = join(folder, 'data');
  const addresses = await startPostgres({ data, port: 0, say });
  try {
    const { environment, people } = await prepareProduct(addresses, data, { marian: ['modeller'], vincent: ['validator'] });
    const web = await startService('web', environment);
    const worker = await startService(
      'worker',
      environment,
      given.profile ? ['--cpu-prof', `--cpu-prof-dir=${given.profile}`] : [],
    );
    try {
      const modeller = new Visitor(supertest.agent(web.url), people.marian.id);
      await modeller.enter(people.marian.email);
      const validator = new Visitor(supertest.agent(web.url), people.vincent.id);
      await validator.enter(people.vincent.email);
      await line(modeller, validator, { url: web.url, path, bytes, sha256 });
      const peak = { web: megabytes(web.process), worker: megabytes(worker.process) };
      if (given.json) console.log(JSON.stringify({ rows, columns, indeterminate, bytes, seconds: steps, peakMemoryMB: peak }));
      else say(`peak memory: web ${peak.web.toFixed(0)} MB, worker ${peak.worker.toFixed(0)} MB`);
    } finally {
      await Promise.all([endService(web.process), endService(worker.process)]);
    }
  } finally {
    await stopPostgres({ data });
  }
} finally {
  rmSync(folder, { recursive: true, force: true });
}

function megabytes(process: Parameters<typeof peakMemoryMiB>[0]): number {
  return (peakMemoryMiB(process) * 1024 * 1024) / 1e6;
}

async function ended(visitor: Visitor, id: string): Promise<Run> {
  const run = await visitor.ended(id, PATIENCE_MS);
  if (run.state !== 'succeeded') throw new Error(`Run ${run.kind} ${run.state}: ${JSON.stringify(run.problem)}`);
  return run;
}

async function line(
  modeller: Visitor,
  validator: Visitor,
  file: { url: string; path: string; bytes: number; sha256: string },
): Promise<void> {
  const modelId = await modeller.model();
  const sampleUrl = await timed('upload', async () => {
    const { headers } = await modeller.beginUpload(modelId, file.bytes).expect(201);
    await uploadFile(new URL(headers.location, file.url).href, file.path, modeller);
    const { body } = await modeller.get(`/api/models/${modelId}/samples`).expect(200);
    const [sample] = body.samples as { id: string; sha256: string }[];
    if (sample.sha256 !== file.sha256) throw new Error('The file that arrived is not the one that was sent');
    return `/api/models/${modelId}/samples/${sample.id}`;
  });
  const preview = await timed('preview', () => modeller.post(`${sampleUrl}/preview`).send({}).expect(200));
  await timed('read, store, profile', async () => {
    const { choices } = preview.body as { choices: object };
    const { body } = await modeller.post(`${sampleUrl}/readings`).send(choices).expect(202);
    await ended(modeller, (body as Run).id);
  });

  const draft = await timed('open the draft', () => modeller.get(`${sampleUrl}/draft`).expect(200));
  const content = draft.body.content as DraftContent;
  const stated: DraftContent = {
    ...content,
    columns: content.columns.map((column) => {
      if (column.column === 'bad') return { ...column, role: 'outcome' };
      if (/^score_/.test(column.column))
        return { ...column, role: 'characteristic', special: [{ label: 'no bureau record', values: [-999] }] };
      return column.role === 'characteristic' ? { ...column, reason: column.reason ?? 'as stated' } : column;
    }),
    outcome: { good: ['0'], bad: ['1'], indeterminate: indeterminate > 0 ? ['2'] : [], excluded: [] },
    exclusions: [
      { reason: 'Younger than 21', combine: 'all', tests: [{ column: 'age_1', below: 21 }] },
      { reason: 'No place to live stated', combine: 'all', tests: [{ column: 'housing_1', missing: true }] },
    ],
    partition: { by: 'seed', seed: 7, holdOutShare: 0.3, outOfTime: { from: '2025-07-01', to: null } },
  };
  const saved = await timed('save the draft', () =>
    modeller.put(`${sampleUrl}/draft`).set('If-Match', draft.headers.etag).send(stated).expect(200),
  );
  if (saved.body.problems.length > 0) throw new Error(JSON.stringify(saved.body.problems));
  await timed('check the draft', () => modeller.post(`${sampleUrl}/draft/check`).expect(200));
  const { revision } = saved.body as { revision: number };
  await timed('compare the partitions', async () => {
    const { body } = await modeller.post(`${sampleUrl}/draft/balance`).set('Idempotency-Key', key()).send({ revision }).expect(202);
    await ended(modeller, (body as Run).id);
  });
  const definitionId = await timed('confirm', async () => {
    const { body } = await modeller
      .post(`${sampleUrl}/definitions`)
      .send({ revision })
      .expect(202);
    return (await ended(modeller, (body as Run).id)).result as { definitionId: string };
  }).then((result) => result.definitionId);
  await timed('quality report', async () => {
    const { body } = await modeller.get(`${sampleUrl}/quality`).expect(200);
    // Confirming has asked for it; what is measured is what is left to wait for.
    if (body.runId) await ended(modeller, body.runId as string);
    await modeller.get(`${sampleUrl}/quality`).expect(200);
  });

  const binningId = await timed('binning', async () => {
    const { body } = await modeller
      .post(`/api/models/${modelId}/binnings`)
      .send({ definitionId, name: 'First binning', constraints: {} })
      .expect(201);
    await ended(modeller, body.runId as string);
    return body.id as string;
  });
  const characteristics = await timed('list of characteristics', () =>
    modeller.get(`/api/binnings/${binningId}/characteristics`).expect(200),
  );
  const { id: characteristicId } = (characteristics.body.characteristics as { id: string; column: string }[]).find(
    ({ column }) => column === 'utilisation_1',
  ) ?? { id: '' };
  await timed('bench of one characteristic', () =>
    modeller.get(`/api/binnings/${binningId}/characteristics/${characteristicId}`).expect(200),
  );

  const waits = await timeReclassing(modeller, binningId, characteristics.body.characteristics as CharacteristicSummary[]);
  for (const name of ['p50', 'p95'] as const) {
    const step = `class one anew, ${name}`;
    steps[step] = waits[name] / 1000;
    say(`${step.padEnd(28)} ${steps[step].toFixed(3)} s`);
  }

  const fitId = await timed('fit, ten folds', async () => {
    const { body } = await modeller
      .post(`/api/models/${modelId}/fits`)
      .set('Idempotency-Key', key())
      .send({ binningId, settings: { name: 'Lasso', folds: { count: 10, seed: 1, classing: 'woe' } } })
      .expect(201);
    await ended(modeller, body.runId as string);
    return body.id as string;
  });
  const fit = await timed('read the path', () => modeller.get(`/api/fits/${fitId}/path`).expect(200));
  say(`${JSON.stringify(fit.body).length} bytes of path`);
  const { oneStandardError } = (fit.body as FitPath).crossValidation as { oneStandardError: number };
  await choose(modeller, fitId, { rule: 'one-standard-error', index: oneStandardError });
  await timed('scorecard', () => scale(modeller, fitId));
  const version = await timed('freeze', () => freeze(modeller, modelId, fitId));
  await writeTexts(modeller, version.id);
  await act(modeller, version.id, { act: 'submit', statement: 'Ready for review' });
  await act(validator, version.id, { act: 'start', statement: 'Full scope' });
  await timed('replicate', async () => {
    const { body } = await validator
      .post(`/api/versions/${version.id}/replications`)
      .set('Idempotency-Key', key())
      .send({ method: 'same code' })
      .expect(202);
    await ended(validator, body.runId as string);
  });
  await timed('stability, 200 resamples', async () => {
    const { body } = await validator
      .post(`/api/versions/${version.id}/stability`)
      .set('Idempotency-Key', key())
      .send({ resamples: 200, seed: 1 })
      .expect(202);
    await ended(validator, body.runId as string);
  });
}
