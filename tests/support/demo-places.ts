import { randomUUID } from 'node:crypto';
import { readFileSync, readdirSync } from 'node:fs';
import { join } from 'node:path';
import type { BinningList, CharacteristicList } from '@tallystone/contracts/binnings/schema';
import type { FitList } from '@tallystone/contracts/fits/schema';
import type { Model, ModelList } from '@tallystone/contracts/models/schema';
import type { Run } from '@tallystone/contracts/runs/schema';
import type { Draft, DraftContent } from '@tallystone/contracts/samples/definition';
import type { SampleList } from '@tallystone/contracts/samples/schema';
import type { VersionList } from '@tallystone/contracts/versions/schema';
import { type Page, expect } from '@playwright/test';

/** Where the demo's things lie: the parts of the client's addresses. */
export interface DemoPlaces {
  readonly modelId: string;
  readonly modelName: string;
  readonly sampleId: string;
  readonly binningId: string;
  /** Ids of the characteristics of the binning, by column. */
  readonly characteristics: Readonly<Record<string, string>>;
  /** Ids of the fits, by name. */
  readonly fits: Readonly<Record<string, string>>;
  readonly versionId: string;
}

/** Reads where the demo's things lie, through the API, on the page of somebody who looks inside its model. */
export async function readDemoPlaces({ request }: Page): Promise<DemoPlaces> {
  const read = async <T>(address: string): Promise<T> => {
    const response = await request.get(address);
    if (!response.ok()) throw new Error(`${response.status()} ${address}`);
    return (await response.json()) as T;
  };
  const model = (await read<ModelList>('/api/models')).models.find(({ inventoryNumber }) => inventoryNumber === 'M-0001')!;
  const of = `/api/models/${model.id}`;
  const { samples } = await read<SampleList>(`${of}/samples`);
  const { binnings } = await read<BinningList>(`${of}/binnings`);
  const { characteristics } = await read<CharacteristicList>(`/api/binnings/${binnings[0].id}/characteristics`);
  const { fits } = await read<FitList>(`${of}/fits`);
  const { versions } = await read<VersionList>(`${of}/versions`);
  return {
    modelId: model.id,
    modelName: model.name,
    sampleId: samples[0].id,
    binningId: binnings[0].id,
    characteristics: Object.fromEntries(characteristics.map(({ column, id }) => [column, id])),
    fits: Object.fromEntries(fits.map(({ name, id }) => [name, id])),
    versionId: versions[0].id,
  };
}

/**
 * Sends what the client would send, in the name of whoever is signed in on the page. Throws where it is refused.
 *
 * A page that was just opened may be waiting for the session's answer, which brings the token that changes need.
 */
export async function post<T>(page: Page, address: string, data: unknown): Promise<T> {
  const find = async (): Promise<string | undefined> =>
    (await page.context().cookies()).find(({ name }) => name === 'XSRF-TOKEN')?.value;
  await expect.poll(find, 'the token of this browser').toBeDefined();
  const token = (await find()) ?? '';
  const response = await page.request.post(address, {
    data,
    headers: { 'X-XSRF-TOKEN': token, 'Idempotency-Key': randomUUID() },
  });
  if (!response.ok()) throw new Error(`${response.status()} ${address}: ${await response.text()}`);
  return (await response.json()) as T;
}

/** A model that nobody has worked on yet, entered by the modeller on whose page this is. */
export const enterEmptyModel = (page: Page, name: string): Promise<Model> =>
  post<Model>(page, '/api/models', {
    name,
    purpose: 'Ranks open accounts by the odds that they stay in order over the next twelve months.',
    product: 'Credit card',
    population: 'Accounts open for six months or longer, in order when scored',
    jurisdiction: 'To be confirmed by counsel',
    owner: 'Head of Credit Risk, Saltmarsh Mutual',
    materialityTier: 2,
  });

/** Invites a person from an admin's page and takes the token out of the letter, which the demo keeps as a file. */
export async function inviteByMail(page: Page, name = 'Nia Newcomer', role = 'validator'): Promise<string> {
  const email = `newcomer-${randomUUID().slice(0, 8)}@saltmarsh.example`;
  await post(page, '/api/invitations', { name, email, roles: [role] });
  const folder = join(process.env['TALLYSTONE_E2E_DATA']!, 'mail');
  for (let tries = 0; tries < 100; tries += 1) {
    for (const name of readdirSync(folder)) {
      // Quoted-printable breaks long lines with an equals sign at their end.
      const letter = readFileSync(join(folder, name), 'utf8').replaceAll(/=\r?\n/g, '');
      const token = letter.includes(email) ? /\/invitation\/([\w-]+)/.exec(letter)?.[1] : undefined;
      if (token) return token;
    }
    await page.waitForTimeout(100);
  }
  throw new Error(`No letter to ${email} has come`);
}

/** Brings a file into a model by the tus protocol, in one piece, in the name of whoever is signed in on the page. */
export async function bringIn(page: Page, modelId: string, fileName: string, text: string): Promise<void> {
  const token = (await page.context().cookies()).find(({ name }) => name === 'XSRF-TOKEN')?.value ?? '';
  const headers = { 'X-XSRF-TOKEN': token, 'Tus-Resumable': '1.0.0' };
  const bytes = Buffer.from(text);
  const begun = await page.request.post(`/api/models/${modelId}/uploads`, {
    headers: {
      ...headers,
      'Upload-Length': String(bytes.length),
      'Upload-Metadata': `filename ${Buffer.from(fileName).toString('base64')}`,
    },
  });
  const sent = await page.request.patch(begun.headers()['location'], {
    headers: { ...headers, 'Upload-Offset': '0', 'Content-Type': 'application/offset+octet-stream' },
    data: bytes,
  });
  if (!sent.ok()) throw new Error(`${sent.status()} ${fileName}: ${await sent.text()}`);
}

/** Waits for a run of the person on whose page this is. Throws where it ends otherwise than well. */
export async function succeeded(page: Page, run: Pick<Run, 'id'>): Promise<Run> {
  const ended: Run[] = [];
  await expect
    .poll(async () => {
      ended[0] = (await (await page.request.get(`/api/runs/${run.id}`)).json()) as Run;
      return ended[0].endedAt;
    }, 'the end of a run')
    .not.toBeNull();
  if (ended[0].state !== 'succeeded') throw new Error(`${ended[0].kind} ${ended[0].state}: ${ended[0].problem?.message}`);
  return ended[0];
}

/**
 * Brings a file into a model that has none, reads it as is proposed and confirms what a change makes of the draft, all in the name of whoever is signed
 * in on the page.
 */
export async function defineSample(
  page: Page,
  modelId: string,
  text: string,
  change: (content: DraftContent) => DraftContent,
): Promise<{ sampleId: string; definitionId: string }> {
  await bringIn(page, modelId, 'applicants.csv', text);
  const samples = (await (await page.request.get(`/api/models/${modelId}/samples`)).json()) as SampleList;
  const [{ id: sampleId }] = samples.samples;
  const path = `/api/models/${modelId}/samples/${sampleId}`;
  const { choices } = await post<{ choices: object }>(page, `${path}/preview`, {});
  await succeeded(page, await post<Run>(page, `${path}/readings`, choices));
  const answer = await page.request.get(`${path}/draft`);
  const { content } = (await answer.json()) as Draft;
  const token = (await page.context().cookies()).find(({ name }) => name === 'XSRF-TOKEN')?.value ?? '';
  const saved = await page.request.put(`${path}/draft`, {
    data: change(content),
    headers: { 'X-XSRF-TOKEN': token, 'If-Match': answer.headers()['etag'] },
  });
  const { revision, problems } = (await saved.json()) as Draft;
  expect(problems).toEqual([]);
  const { result } = await succeeded(page, await post<Run>(page, `${path}/definitions`, { revision }));
  return { sampleId, definitionId: (result as { definitionId: string }).definitionId };
}
