import type { DefinedColumn, Draft, DraftContent } from '@tallystone/contracts/samples/definition';
import type { Dictionary } from '@tallystone/contracts/samples/dictionary';
import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import type { Run } from '@tallystone/contracts/runs/schema';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { IntakeServer, type Visitor } from '../support/intake';

/** A file that is read again keeps what was decided about it, as far as the new choices let it. */
let server: IntakeServer;
let modeller: Visitor;
let modelId: string;
let path: string;

beforeAll(async () => {
  server = await IntakeServer.start();
  modeller = await server.signIn('marian', 'modeller');
  modelId = await modeller.model();
  // "none" in every ninth row makes incomes a column with texts; utilisation is read as text until its decimal comma is chosen.
  const lines = ['application_id;applied_on;monthly_income;utilisation;home;state;part'];
  for (let row = 0; row < 400; row++)
    lines.push(
      `SM-${row};2024-0${1 + (row % 9)}-11;${row % 9 === 0 ? 'none' : 1000 + row};${row % 7 === 0 ? '-999' : `${row % 90},5`};${['owner', 'rent'][row % 2]};${['good', 'good', 'bad', 'open'][row % 4]};${['d', 'h', 't'][row % 3]}`,
    );
  path = (await modeller.sample(modelId, `${lines.join('\n')}\n`, { decimal: '.', thousands: null })).path;
}, 120_000);
afterAll(() => server.stop());

const draft = async (): Promise<{ content: DraftContent; etag: string }> => {
  const { body, headers } = await modeller.get(`${path}/draft`).expect(200);
  return { content: (body as Draft).content, etag: headers.etag };
};
const change = async (edit: (content: DraftContent) => DraftContent): Promise<DraftContent> => {
  const { content, etag } = await draft();
  const next = edit(content);
  await modeller.put(`${path}/draft`).set('If-Match', etag).send(next).expect(200);
  return next;
};
const readAgain = async (choices: Partial<ReadingChoices>): Promise<void> => {
  const { body } = await modeller.get(path).expect(200);
  const started = await modeller
    .post(`${path}/readings`)
    .send({ ...(body as { reading: ReadingChoices }).reading, ...choices })
    .expect(202);
  expect((await modeller.ended((started.body as Run).id)).state).toBe('succeeded');
};
const note = async (): Promise<Dictionary['readAgain']> =>
  ((await modeller.get(`${path}/dictionary`)).body as Dictionary).readAgain;
const roles: Partial<Record<string, DefinedColumn['role']>> = {
  monthly_income: 'characteristic',
  utilisation: 'characteristic',
  home: 'segment',
  state: 'outcome',
  part: 'partition',
  applied_on: 'application date',
};

describe('a file that is read again', () => {
  it('keeps roles, codes, outcome, exclusions and partition', async () => {
    expect(await note()).toBeNull();
    const decided = await change((content) => ({
      columns: content.columns.map((column) => ({
        ...column,
        role: roles[column.column] ?? column.role,
        reason: column.column === 'home' ? 'split later' : column.reason,
        special: column.column === 'utilisation' ? [{ label: 'no bureau record', values: ['-999', 'n/k'] }] : [],
      })),
      outcome: { good: ['good'], bad: ['bad'], indeterminate: ['open'], excluded: [] },
      declined: null,
      exclusions: [
        { reason: 'the first month', combine: 'all', tests: [{ column: 'applied_on', below: '2024-02-01' }] },
        { reason: 'rented', combine: 'any', tests: [{ column: 'home', in: ['rent'] }] },
      ],
      partition: { by: 'column', development: ['d'], holdOut: ['h'], outOfTime: ['t'] },
    }));
    const income = { ...decided.columns.find(({ column }) => column === 'monthly_income')! };
    expect(income.kind).toBe('categorical');
    await readAgain({ missing: ['', 'none'] });
    const { content } = await draft();
    expect(content).toEqual({
      ...decided,
      columns: decided.columns.map((column) => (column.column === 'monthly_income' ? { ...column, kind: 'numeric' } : column)),
    });
    expect(await note()).toEqual({ columns: decided.columns.map(({ column }) => column), lost: [] });
  });

  it('takes special codes along into numbers, and says which it could not', async () => {
    await readAgain({ decimal: ',', missing: ['', 'none'] });
    const { content } = await draft();
    expect(content.columns.find(({ column }) => column === 'utilisation')).toMatchObject({
      kind: 'numeric',
      role: 'characteristic',
      special: [{ label: 'no bureau record', values: [-999] }],
    });
    expect((await note())?.lost).toEqual([
      { what: 'utilisation', why: 'It is numeric under these choices: special codes that are no numbers were left out.' },
    ]);
  });

  it('suggests anew what no longer fits, with the reason', async () => {
    await change((content) => ({
      ...content,
      exclusions: [
        ...content.exclusions,
        { reason: 'no use of the card', combine: 'all', tests: [{ column: 'utilisation', below: 10 }] },
      ],
    }));
    await readAgain({ decimal: '.', missing: ['', 'none', 'open'] });
    const { content } = await draft();
    expect(content.exclusions.map(({ reason }) => reason)).toEqual(['the first month', 'rented']);
    expect(content.outcome).toEqual({ good: ['good'], bad: ['bad'], indeterminate: ['open'], excluded: [] });
    expect((await note())?.lost).toEqual([
      { what: 'utilisation', why: 'It is categorical under these choices, and was numeric.' },
      {
        what: 'Exclusion “no use of the card”',
        why: 'utilisation is categorical under these choices, and cannot be compared with its limit.',
      },
    ]);
  });

  it('has other columns under another delimiter, and everything is suggested anew', async () => {
    await readAgain({ delimiter: '|' });
    const { content } = await draft();
    expect(content.columns).toHaveLength(1);
    expect(content.exclusions).toEqual([]);
    const lost = (await note())?.lost.map(({ what }) => what) ?? [];
    expect(lost).toEqual(expect.arrayContaining(['home', 'state', 'Outcome', 'Partition', 'Exclusion “rented”']));
  });
});
