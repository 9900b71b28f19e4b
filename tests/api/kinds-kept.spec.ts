import type { DefinedColumn, Draft, DraftContent } from '@tallystone/contracts/samples/definition';
import type { Dictionary } from '@tallystone/contracts/samples/dictionary';
import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { IntakeServer, type Visitor } from '../support/intake';

/**
 * What somebody chose the values of a column to be stays, with its codes, when the file is read again and in a later sample: codes of regions that are
 * digits stay categories, and numbers among which a word is frequent stay numbers. What only followed the reading follows it on.
 */
let server: IntakeServer;
let modeller: Visitor;
let modelId: string;
let path: string;

const rowCount = 400;
/** NTC in an eighth of the rows, or in a twenty-fifth. `paid` is read as texts until its decimal comma is chosen. */
const csv = (rows: number, every = 8): string =>
  `region;score;paid;bad\n${Array.from({ length: rows }, (_, row) => `${1 + (row % 4)};${row % every === 0 ? 'NTC' : 300 + ((row * 37) % 500)};${row % 7 === 0 ? '-999' : `${row % 90},5`};${row % 5 === 0 ? 1 : 0}`).join('\n')}\n`;
const signs = { decimal: '.', thousands: null } as const;

const chosen: Record<string, Partial<DefinedColumn>> = {
  region: { kind: 'categorical', role: 'characteristic', special: [{ label: 'Overseas', values: ['4'] }] },
  score: { kind: 'numeric', role: 'characteristic', special: [{ label: 'New to credit', values: ['NTC'] }], reason: null },
  paid: { kind: 'categorical', role: 'characteristic', special: [{ label: 'no record', values: ['-999'] }] },
};
const draft = async (of: string): Promise<Draft & { etag: string }> => {
  const { body, headers } = await modeller.get(`${of}/draft`).expect(200);
  return { ...(body as Draft), etag: headers.etag };
};
const column = (content: DraftContent, name: string): DefinedColumn | undefined =>
  content.columns.find((one) => one.column === name);
const readAgain = async (choices: Partial<ReadingChoices>): Promise<void> => {
  const { body } = await modeller.get(path).expect(200);
  const started = await modeller.post(`${path}/readings`).send({ ...(body as { reading: ReadingChoices }).reading, ...choices }).expect(202);
  expect((await modeller.ended(started.body.id as string)).state).toBe('succeeded');
}; // prettier-ignore
const dictionary = async (of: string): Promise<Dictionary> =>
  (await modeller.get(`${of}/dictionary`).expect(200)).body as Dictionary;

beforeAll(async () => {
  server = await IntakeServer.start();
  modeller = await server.signIn('marian', 'modeller');
  modelId = await modeller.model();
  ({ path } = await modeller.sample(modelId, csv(rowCount), signs));
  const { content, etag } = await draft(path);
  expect(content.columns.map(({ kind }) => kind)).toEqual(['numeric', 'categorical', 'categorical', 'numeric']);
  await modeller
    .put(`${path}/draft`)
    .set('If-Match', etag)
    .send({ ...content, columns: content.columns.map((one) => ({ ...one, ...chosen[one.column] })) })
    .expect(200);
}, 120_000);
afterAll(() => server.stop());

describe('the kind that somebody chose for a column', () => {
  it('stays with its codes when the file is read again', async () => {
    const before = (await draft(path)).content;
    await readAgain({ missing: ['', 'NA'] });
    const { content, problems } = await draft(path);
    expect(content).toEqual(before);
    expect(problems).toEqual([]);
    expect((await dictionary(path)).readAgain?.lost).toEqual([]);
    await readAgain({ missing: ['', 'n/k'] });
    expect((await draft(path)).content).toEqual(before);
  });

  it('stays with its codes in a later sample, whether reading takes the column for the same there or not', async () => {
    const { revision } = await draft(path);
    const started = await modeller.post(`${path}/definitions`).send({ revision }).expect(202);
    expect(await modeller.ended(started.body.id as string)).toMatchObject({ state: 'succeeded' });
    for (const every of [8, 25]) {
      const later = await modeller.sample(modelId, csv(rowCount + every, every), signs);
      const { content, problems } = await draft(later.path);
      expect(column(content, 'region')).toMatchObject(chosen.region);
      expect(column(content, 'score')).toMatchObject(chosen.score);
      expect(problems).toEqual([]);
      expect((await dictionary(later.path)).carried).toMatchObject({
        columns: ['region', 'score', 'paid', 'bad'],
        notCarried: [],
      });
    }
  });

  it('is not what only followed the reading: texts that are numbers in a later sample take their codes along', async () => {
    const later = await modeller.sample(modelId, csv(rowCount + 1), { ...signs, decimal: ',' });
    const { content } = await draft(later.path);
    expect(column(content, 'paid')).toMatchObject({ kind: 'numeric', special: [{ label: 'no record', values: [-999] }] });
    expect(column(content, 'region')).toMatchObject(chosen.region);
    expect((await dictionary(later.path)).carried?.definition?.lost).toEqual([]);
  });

  it('is told where it cannot stay', async () => {
    // Nothing of the scores is a number here.
    const lines = csv(rowCount + 2).replaceAll(/^(\d);[^;]+;/gm, '$1;good;');
    const later = await modeller.sample(modelId, lines.replace('\n1;good;', '\n1;poor;'), signs);
    const { carried } = await dictionary(later.path);
    expect(carried?.notCarried).toContainEqual({ column: 'score', why: 'It is categorical here, and was numeric.' });
  });
});
