import type { DefinedColumn, DraftContent, Draft } from '@tallystone/contracts/samples/definition';
import type { Dictionary } from '@tallystone/contracts/samples/dictionary';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { IntakeServer, type Visitor } from '../support/intake';

/**
 * 0 and 1 of one column mean nothing in another: where the role of the outcome, the decision or the partition moves, what was said of the values goes
 * with the column, so that good and bad never change places.
 */
let server: IntakeServer;
let modeller: Visitor;

beforeAll(async () => {
  server = await IntakeServer.start();
  modeller = await server.signIn('marian', 'modeller');
}, 120_000);
afterAll(() => server.stop());

/** 1 is bad in `bad` and good in `repaid`; `approved` and `kept` are 0 and 1 too, as are `part` and `split`. */
const file = (rows: number, changed: (row: number) => Partial<Record<string, string>> = () => ({})): string => {
  const names = ['age', 'approved', 'kept', 'part', 'split', 'bad', 'repaid'];
  const lines = Array.from({ length: rows }, (_, row) => {
    const cells: Partial<Record<string, string>> = {
      age: String(18 + ((row * 37) % 50)),
      approved: row % 10 === 9 ? '0' : '1',
      kept: row % 10 === 9 ? '1' : '0',
      part: row % 3 === 0 ? '1' : '0',
      split: row % 3 === 0 ? '0' : '1',
      bad: row % 5 === 0 ? '1' : '0',
      repaid: row % 5 === 0 ? '0' : '1',
      ...changed(row),
    };
    return names.map((name) => cells[name]).join(',');
  });
  return `${[names.join(','), ...lines].join('\n')}\n`;
};

type Roles = Partial<Record<string, DefinedColumn['role']>>;
const withRoles = (columns: readonly DefinedColumn[], roles: Roles): DefinedColumn[] =>
  columns.map((column) => ({ ...column, role: roles[column.column] ?? column.role }));
const roleOf = (content: DraftContent, role: DefinedColumn['role']): string[] =>
  content.columns.filter((column) => column.role === role).map(({ column }) => column);
const draft = async (path: string): Promise<Draft & { etag: string }> => {
  const { body, headers } = await modeller.get(`${path}/draft`).expect(200);
  return { ...(body as Draft), etag: headers.etag };
};
const save = async (path: string, edit: (content: DraftContent) => DraftContent): Promise<Draft> => {
  const { content, etag } = await draft(path);
  const { body } = await modeller.put(`${path}/draft`).set('If-Match', etag).send(edit(content)).expect(200);
  return body as Draft;
};
const confirm = async (path: string): Promise<void> => {
  const { revision } = await draft(path);
  const started = await modeller.post(`${path}/definitions`).send({ revision }).expect(202);
  expect(await modeller.ended(started.body.id as string)).toMatchObject({ state: 'succeeded' });
};
const dictionary = async (path: string): Promise<Dictionary> =>
  (await modeller.get(`${path}/dictionary`).expect(200)).body as Dictionary;
const carried = async (path: string): Promise<NonNullable<Dictionary['carried']>['definition']> =>
  (await dictionary(path)).carried?.definition;

const others: Roles = {
  bad: 'not used',
  approved: 'not used',
  part: 'not used',
  repaid: 'outcome',
  kept: 'decision',
  split: 'partition',
};
const meant = {
  outcome: { good: ['1'], bad: ['0'], indeterminate: [], excluded: [] },
  declined: { values: ['1'] },
  partition: { by: 'column', development: ['1'], holdOut: ['0'], outOfTime: [] },
} satisfies Partial<DraftContent>;

describe('roles given by a dictionary file', () => {
  it('take what values meant in the other column out of the draft', async () => {
    const { path } = await modeller.sample(await modeller.model('By file'), file(300));
    await save(path, (content) => ({
      ...content,
      columns: withRoles(content.columns, { approved: 'decision', part: 'partition', bad: 'outcome', repaid: 'not used' }),
      outcome: { good: ['0'], bad: ['1'], indeterminate: [], excluded: [] },
      declined: { values: ['0'] },
      partition: { by: 'column', development: ['0'], holdOut: ['1'], outOfTime: [] },
    }));
    const { headers } = await modeller.get(`${path}/dictionary`).expect(200);
    const kept = await modeller.post(`${path}/dictionary/file`).set('If-Match', headers.etag).send({ text: 'column,role\nage,segment\n' });
    expect(kept.status).toBe(200);
    // Where no role of these moves everything stays.
    expect((await draft(path)).content).toMatchObject({ outcome: { good: ['0'], bad: ['1'] }, declined: { values: ['0'] }, partition: { development: ['0'] } });
    const text = `column,role\nage,characteristic\n${Object.entries(others).map(([column, role]) => `${column},${role}`).join('\n')}\n`;
    await modeller.post(`${path}/dictionary/file`).set('If-Match', kept.headers.etag).send({ text }).expect(200);
    const { content, problems } = await draft(path);
    expect(roleOf(content, 'outcome')).toEqual(['repaid']);
    expect(content).toMatchObject({
      outcome: { good: [], bad: [], indeterminate: [], excluded: [] },
      declined: null,
      partition: { by: 'column', development: [], holdOut: [], outOfTime: [] },
    });
    expect(problems.map(({ code }) => code)).toEqual(expect.arrayContaining(['no-good', 'no-bad', 'no-development']));
  }); // prettier-ignore
});

describe('a later sample', () => {
  it('takes what values mean from the definition, never from what is suggested for another column', async () => {
    const modelId = await modeller.model('Carried');
    const first = await modeller.sample(modelId, file(300));
    const suggested = (await draft(first.path)).content;
    expect(roleOf(suggested, 'outcome')).toEqual(['bad']);
    expect(suggested.outcome).toMatchObject({ good: ['0'], bad: ['1'] });
    await save(first.path, (content) => ({ ...content, columns: withRoles(content.columns, others), ...meant }));
    await confirm(first.path);
    const second = await modeller.sample(modelId, file(310));
    const { content, problems } = await draft(second.path);
    expect([roleOf(content, 'outcome'), roleOf(content, 'decision'), roleOf(content, 'partition')]).toEqual([['repaid'], ['kept'], ['split']]);
    expect(content).toMatchObject(meant);
    expect(problems).toEqual([]);
    expect(await carried(second.path)).toEqual({ carried: ['outcome', 'declined', 'partition'], lost: [] });
  }); // prettier-ignore

  it('says which values are not there, and what was said of a column that has not the role', async () => {
    const modelId = await modeller.model('Not all');
    const first = await modeller.sample(
      modelId,
      file(300, (row) => (row % 10 === 3 ? { repaid: 'open' } : row === 0 ? { split: 'late' } : {})),
    );
    await save(first.path, (content) => ({
      ...content,
      columns: withRoles(content.columns, others),
      ...meant,
      outcome: { ...meant.outcome, indeterminate: ['open'] },
      partition: { ...meant.partition, outOfTime: ['late'] },
    }));
    await confirm(first.path);
    // Nothing is open or late here, and the decision has no values at all.
    const second = await modeller.sample(
      modelId,
      file(310, () => ({ kept: '' })),
    );
    const { content } = await draft(second.path);
    expect(content).toMatchObject({ outcome: meant.outcome, partition: meant.partition, declined: null });
    expect(await carried(second.path)).toEqual({
      carried: ['outcome', 'partition'],
      lost: [
        { what: 'Outcome', why: '"open" is not in this file.' },
        { what: 'Declined', why: 'It was said of kept, which is not the decision here.' },
        { what: 'Partition', why: '"late" is not in this file.' },
      ],
    });
  });

  it('takes a rule over with its columns, and that nobody was declined', async () => {
    const modelId = await modeller.model('By rule');
    const csv = (rows: number): string =>
      `income,dpd,months,decision\n${Array.from({ length: rows }, (_, row) => `${1000 + ((row * 37) % 500)},${row % 4 === 0 ? 120 : row % 8},24,${row % 6 === 0 ? 'declined' : 'accepted'}`).join('\n')}\n`;
    const first = await modeller.sample(modelId, csv(200));
    const rule = { bad: 60, indeterminate: null, missing: 'excluded', monthsOnBook: { column: 'months', least: 12 } } as const;
    const outcome = { good: [], bad: [], indeterminate: [], excluded: [], rule };
    await save(first.path, (content) => ({
      ...content,
      columns: withRoles(content.columns, { income: 'characteristic', dpd: 'outcome', months: 'not used', decision: 'decision' }),
      outcome,
      declined: null,
    }));
    await confirm(first.path);
    const second = await modeller.sample(modelId, csv(210));
    const { content } = await draft(second.path);
    expect(content.outcome).toEqual(outcome);
    expect(content.declined).toBeNull();
    expect(await carried(second.path)).toEqual({ carried: ['outcome', 'declined'], lost: [] });
  });

  it('has hold-out drawn by a seed where the definition made no column the partition', async () => {
    const modelId = await modeller.model('No partition');
    const csv = (rows: number): string =>
      `income,split,bad\n${Array.from({ length: rows }, (_, row) => `${1000 + ((row * 37) % 500)},${row % 3 === 0 ? 'test' : 'dev'},${row % 4 === 0 ? 1 : 0}`).join('\n')}\n`;
    const first = await modeller.sample(modelId, csv(200));
    expect((await draft(first.path)).content.partition.by).toBe('column');
    const partition = { by: 'seed', seed: 9, holdOutShare: 0.2, outOfTime: null } as const;
    await save(first.path, (content) => ({ ...content, columns: withRoles(content.columns, { split: 'not used' }), partition }));
    await confirm(first.path);
    const second = await modeller.sample(modelId, csv(210));
    expect(await draft(second.path)).toMatchObject({ content: { partition: { by: 'seed' } }, problems: [] });
  });
});

describe('a file that is read again', () => {
  it('suggests nothing of values for a column that is not the one it suggests', async () => {
    const { path } = await modeller.sample(await modeller.model('Again'), file(300));
    await save(path, (content) => ({
      ...content,
      columns: withRoles(content.columns, { ...others, repaid: 'not used', kept: 'not used' }),
      outcome: { good: [], bad: [], indeterminate: [], excluded: [] },
      declined: null,
    }));
    const { reading } = (await modeller.get(path).expect(200)).body as { reading: { missing: string[] } };
    const started = await modeller.post(`${path}/readings`).send({ ...reading, missing: ['', 'NA'] }).expect(202);
    await modeller.ended(started.body.id as string);
    const { content } = await draft(path);
    expect(roleOf(content, 'outcome')).toEqual([]);
    expect(content).toMatchObject({ outcome: { good: [], bad: [], indeterminate: [], excluded: [] }, declined: null });
  }); // prettier-ignore
});
