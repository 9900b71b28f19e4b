import { chmodSync, closeSync, mkdtempSync, openSync, rmSync, statSync, writeSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import supertest from 'supertest';
import type { CharacteristicSummary } from '@tallystone/contracts/binnings/schema';
import type { Run } from '@tallystone/contracts/runs/schema';
import type { DraftContent } from '@tallystone/contracts/samples/definition';
import { Generator } from '@tallystone/numeric/random/generator';
import { ensureBuilt } from '../../../tools/build.mjs';
import { startPostgres, stopPostgres } from '../../../tools/postgres.mjs';
import { Visitor } from '../../support/intake';
import { type Waits, timeReclassing } from '../../support/reclassing';
import { endService, prepareProduct, startService, uploadFile } from '../product';
import { forms, valueOf } from './store';

/** Minutes that a run is waited for. */
const patience = 20 * 60_000;

export interface ThroughApi {
  /** What had to be waited for before anything could be classed anew, in seconds. */
  readonly seconds: Readonly<Record<'upload' | 'read' | 'confirm' | 'binning', number>>;
  readonly characteristics: number;
  readonly reclass: Waits;
}

/**
 * The same kind of sample as `storeSample` has, brought into the built product as a file, with a web process and a worker on a PostgreSQL of their own: its
 * characteristics are classed, and then one after the other is classed anew through the API.
 *
 * @param constraints of the binning; each re-class changes the number of bins beside them
 */
export async function throughApi(
  rows: number,
  count: number,
  constraints: Record<string, unknown>,
  say: (line: string) => void,
): Promise<ThroughApi> {
  await ensureBuilt('server', { say });
  const folder = mkdtempSync(join(tmpdir(), 'tallystone-bench-'));
  chmodSync(folder, 0o755);
  try {
    const path = join(folder, 'invented.csv');
    writeFile(path, rows, count);
    const data = join(folder, 'data');
    const addresses = await startPostgres({ data, port: 0, say });
    try {
      const { environment, people } = await prepareProduct(addresses, data, { marian: ['modeller'] });
      const web = await startService('web', environment);
      const worker = await startService('worker', environment);
      try {
        const modeller = new Visitor(supertest.agent(web.url), people.marian.id);
        await modeller.enter(people.marian.email);
        return await line(modeller, { url: web.url, path, count, constraints });
      } finally {
        await Promise.all([endService(web.process), endService(worker.process)]);
      }
    } finally {
      await stopPostgres({ data });
    }
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

async function line(
  modeller: Visitor,
  file: { url: string; path: string; count: number; constraints: Record<string, unknown> },
): Promise<ThroughApi> {
  const seconds = { upload: 0, read: 0, confirm: 0, binning: 0 };
  const timed = async <Value>(step: keyof typeof seconds, work: () => Promise<Value>): Promise<Value> => {
    const began = performance.now();
    const value = await work();
    seconds[step] = (performance.now() - began) / 1000;
    return value;
  };
  const ended = async (id: string): Promise<Run> => {
    const run = await modeller.ended(id, patience);
    if (run.state !== 'succeeded') throw new Error(`Run ${run.kind} ${run.state}: ${JSON.stringify(run.problem)}`);
    return run;
  };
  const modelId = await modeller.model();
  const sampleUrl = await timed('upload', async () => {
    const { headers } = await modeller.beginUpload(modelId, statSync(file.path).size).expect(201);
    await uploadFile(new URL(headers.location, file.url).href, file.path, modeller);
    const { body } = await modeller.get(`/api/models/${modelId}/samples`).expect(200);
    return `/api/models/${modelId}/samples/${(body.samples as { id: string }[])[0].id}`;
  });
  await timed('read', async () => {
    const preview = await modeller.post(`${sampleUrl}/preview`).send({}).expect(200);
    const { body } = await modeller
      .post(`${sampleUrl}/readings`)
      .send((preview.body as { choices: object }).choices)
      .expect(202);
    await ended((body as Run).id);
  });
  const definitionId = await timed('confirm', async () => {
    const draft = await modeller.get(`${sampleUrl}/draft`).expect(200);
    const content = draft.body.content as DraftContent;
    const stated: DraftContent = {
      ...content,
      columns: content.columns.map((column) => ({
        ...column,
        role: column.column === 'bad' ? 'outcome' : column.column === 'applied_on' ? 'application date' : 'characteristic',
        reason: null,
      })),
      outcome: { good: ['0'], bad: ['1'], indeterminate: [], excluded: [] },
      partition: { by: 'seed', seed: 7, holdOutShare: 0.3, outOfTime: { from: '2024-07-01', to: null } },
    };
    const saved = await modeller.put(`${sampleUrl}/draft`).set('If-Match', draft.headers.etag).send(stated).expect(200);
    if (saved.body.problems.length > 0) throw new Error(JSON.stringify(saved.body.problems));
    const { body } = await modeller
      .post(`${sampleUrl}/definitions`)
      .send({ revision: saved.body.revision as number })
      .expect(202);
    return ((await ended((body as Run).id)).result as { definitionId: string }).definitionId;
  });
  const binningId = await timed('binning', async () => {
    const { body } = await modeller
      .post(`/api/models/${modelId}/binnings`)
      .send({ definitionId, name: 'First binning', constraints: file.constraints })
      .expect(201);
    await ended(body.runId as string);
    return body.id as string;
  });
  const { body } = await modeller.get(`/api/binnings/${binningId}/characteristics`).expect(200);
  const listed = body.characteristics as CharacteristicSummary[];
  if (listed.length !== file.count) throw new Error(`${listed.length} of ${file.count} characteristics were classed`);
  return {
    seconds,
    characteristics: listed.length,
    reclass: await timeReclassing(modeller, binningId, listed, file.constraints),
  };
}

/** Columns as the stored sample has them, three years of applications, and an outcome that hangs on what two in five values of each column show. */
function writeFile(path: string, rows: number, count: number): void {
  const random = new Generator(7);
  const file = openSync(path, 'w');
  const names = Array.from({ length: count }, (_, j) => `column_${j}`);
  let text = `applied_on,${names.join(',')},bad\n`;
  const two = (value: number): string => String(value).padStart(2, '0');
  for (let row = 0; row < rows; row++) {
    const risk = random.uniform();
    const month = Math.floor(36 * random.uniform());
    text += `20${22 + Math.floor(month / 12)}-${two((month % 12) + 1)}-${two(1 + Math.floor(28 * random.uniform()))}`;
    for (let j = 0; j < count; j++) {
      const mixed = random.uniform() < 0.4 ? risk : random.uniform();
      const different = forms[j % forms.length];
      text += random.uniform() < 0.03 ? ',' : `,${valueOf(different, Math.floor(mixed * different))}`;
    }
    text += random.uniform() < 1 / (1 + Math.exp(-(2.2 - 1.6 * risk))) ? ',0\n' : ',1\n';
    if (text.length >= 8 << 20) {
      writeSync(file, text);
      text = '';
    }
  }
  writeSync(file, text);
  closeSync(file);
}
