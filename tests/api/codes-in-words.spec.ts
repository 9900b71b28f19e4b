import type { Binning } from '@tallystone/contracts/binnings/schema';
import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { DraftContent } from '@tallystone/contracts/samples/definition';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { benchOf } from '../support/binned';
import { IntakeServer, type Visitor } from '../support/intake';

/**
 * Numeric columns in which special codes are words, as bureau files have them: named, they have a bin of their own and are neither missing nor a
 * reason to refuse the column.
 */
let server: IntakeServer;
let modeller: Visitor;
let modelId: string;

beforeAll(async () => {
  server = await IntakeServer.start();
  modeller = await server.signIn('marian', 'modeller');
  modelId = await modeller.model();
});
afterAll(() => server.stop());

const rowCount = 2000;
const months = (row: number): string => (row % 10 === 3 ? 'NTC' : String((row * 37) % 120));
const searches = (row: number): string => (row % 50 === 7 ? 'NH' : String((row * 7) % 9));
const csv = `months,searches,bad\n${Array.from({ length: rowCount }, (_, row) => {
  const risk = (months(row) === 'NTC' ? 0.4 : 0.3 - Number(months(row)) / 600) > ((row * 7919) % 1000) / 1000;
  return [months(row), searches(row), risk ? 1 : 0].join(',');
}).join('\n')}\n`;

async function confirm(path: string, change: (columns: DraftContent['columns']) => DraftContent['columns']) {
  const { body, headers } = await modeller.get(`${path}/draft`).expect(200);
  const content = body.content as DraftContent;
  const saved = await modeller
    .put(`${path}/draft`)
    .set('If-Match', headers.etag)
    .send({ ...content, columns: change(content.columns), partition: { by: 'seed', seed: 3, holdOutShare: 0.3, outOfTime: null } })
    .expect(200);
  return modeller.post(`${path}/definitions`).send({ revision: saved.body.revision as number });
}

describe('special codes in words among numbers', () => {
  it('are told, named, counted, and classed in a bin of their own', async () => {
    const { path } = await modeller.sample(modelId, csv);
    const profiles = (await modeller.get(`${path}/columns`).expect(200)).body.columns as ColumnProfile[];
    expect(profiles.map(({ kind }) => kind)).toEqual(['categorical', 'numeric', 'numeric']);
    expect(profiles[0].flags.map(({ code }) => code)).toContain('numbers-as-text');
    expect(profiles[1].flags.find(({ code }) => code === 'unreadable-numbers')?.values).toEqual(['NH']);

    const asked = (months: (string | number)[], searches: (string | number)[]) => (columns: DraftContent['columns']) =>
      columns.map((column) => {
        const values = column.column === 'months' ? months : column.column === 'searches' ? searches : null;
        if (!values) return column;
        const special = values.length > 0 ? [{ label: 'no record', values }] : [];
        return { ...column, role: 'characteristic' as const, kind: 'numeric' as const, special };
      });
    const unnamed = await confirm(path, asked([], []));
    expect(unnamed.status).toBe(422);
    expect(unnamed.body.problems.map(({ code }: { code: string }) => code)).toEqual(['not-numeric', 'unreadable-numbers']);
    expect(unnamed.body.problems[1].message).toContain('Name them as special codes');
    const numbers = await confirm(path, asked(['NTC'], ['NH', '5']));
    expect(numbers.body.problems).toMatchObject([{ code: 'special-is-number', where: { column: 'searches', value: '5' } }]);
    const started = await confirm(path, asked(['NTC'], ['NH']));
    expect(started.status).toBe(202);
    const run = await modeller.ended(started.body.id as string);
    expect(run).toMatchObject({ state: 'succeeded' });
    const { definitionId } = run.result as { definitionId: string };

    for (let wait = 0; wait < 400 && (await modeller.get(`${path}/quality`)).body.report === null; wait++)
      await new Promise((resolve) => setTimeout(resolve, 50));
    const { report } = (await modeller.get(`${path}/quality`).expect(200)).body as { report: { columns: { column: string; special: number; missing: number }[]; flags: { column: string; code: string }[] } };
    expect(report.columns.slice(0, 2)).toMatchObject([
      { column: 'months', special: 200, missing: 0 },
      { column: 'searches', special: 40, missing: 0 },
    ]);
    expect(report.flags.filter(({ code }) => code === 'unreadable-numbers')).toEqual([]);

    const begun = await modeller.post(`/api/models/${modelId}/binnings`).send({ definitionId, name: 'With codes' }).expect(201);
    const binning = begun.body as Binning;
    expect((await modeller.ended(binning.runId!)).state).toBe('succeeded');
    const { detail } = await benchOf(modeller, binning.id, 'months');
    expect(detail.kind).toBe('numeric');
    expect(detail.fine).toMatchObject({ kind: 'numeric', special: ['no record'] });
    expect(detail.fine.edges.length).toBeGreaterThan(10);
    const { rows } = detail.fine.development;
    const held = detail.fine.holdOut.rows;
    // Slots: fine classes, the code, missing.
    expect(rows[rows.length - 2] + held[held.length - 2]).toBe(200);
    expect(rows[rows.length - 1] + held[held.length - 1]).toBe(0);
    expect(detail.definition).toMatchObject({ kind: 'numeric', special: [{ label: 'no record', values: ['NTC'], bin: 'own' }] });
  });
});
