import type { DraftContent } from '@tallystone/contracts/samples/definition';
import type { ColumnQualityDetail, QualityFlag, QualityState } from '@tallystone/contracts/samples/quality';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { IntakeServer, type Visitor } from '../support/intake';

let server: IntakeServer;
let modeller: Visitor;
let other: Visitor;
let validator: Visitor;
let modelId: string;
let sampleId: string;
let path: string;

interface Applicant {
  readonly id: string;
  readonly month: number;
  readonly income: number;
  readonly bureau: number;
  readonly channel: string;
  readonly fee: string;
  readonly settled: string;
  readonly bad: number;
}

/** 30 months of 120 invented applicants each; from the 25th on they apply by telephone. May 2024 (the 17th month) is missing. */
const applicants: Applicant[] = Array.from({ length: 3600 }, (_, row): Applicant => {
  const month = Math.floor(row / 120);
  const bad = row % 8 === 0 ? 1 : 0;
  return {
    id: `SM-${row}`,
    month,
    income: row === 77 ? 99_000_000 : 900 + ((row * 37) % 2000),
    bureau: row % 11 === 0 ? -999 : 300 + ((row * 13) % 400),
    channel: month >= 24 && row % 4 !== 0 ? 'telephone' : row % 2 === 0 ? 'branch' : 'web',
    // Charged after the decision, to bads alone.
    fee: bad === 1 ? String(10 + (row % 5)) : '',
    settled: (bad === 1) === (row % 100 !== 0) ? 'no' : 'yes',
    bad,
  };
}).filter(({ month }) => month !== 16);

const dayOf = ({ month, id }: Applicant): string =>
  new Date(Date.UTC(2023, month, 1 + (Number(id.slice(3)) % 28))).toISOString().slice(0, 10);

function csv(): string {
  const lines = applicants.map((one) =>
    [one.id, dayOf(one), one.income, one.bureau, one.channel, one.fee, one.settled, 'B1', one.bad].join(','),
  );
  // Three records stand there twice.
  return `application_id,applied_on,income,bureau_score,channel,fee,settled,branch,bad\n${[...lines, ...lines.slice(0, 3)].join('\n')}\n`;
}

beforeAll(async () => {
  server = await IntakeServer.start();
  modeller = await server.signIn('marian', 'modeller');
  other = await server.signIn('oswin', 'modeller');
  validator = await server.signIn('vera', 'validator');
  modelId = await modeller.model();
  ({ id: sampleId, path } = await modeller.sample(modelId, csv()));
}, 240_000);
afterAll(() => server.stop());

async function define(change: (content: DraftContent) => DraftContent): Promise<string> {
  const { body, headers } = await modeller.get(`${path}/draft`).expect(200);
  const saved = await modeller.put(`${path}/draft`).set('If-Match', headers.etag).send(change(body.content)).expect(200);
  expect(saved.body.problems).toEqual([]);
  const started = await modeller.post(`${path}/definitions`).send({ revision: saved.body.revision }).expect(202);
  const run = await modeller.ended(started.body.id);
  expect(run.state).toBe('succeeded');
  return (run.result as { definitionId: string }).definitionId;
}

const state = async (visitor = modeller): Promise<QualityState> =>
  (await visitor.get(`${path}/quality`).expect(200)).body as QualityState;

async function made(): Promise<NonNullable<QualityState['report']>> {
  const { runId } = await state();
  if (runId) expect(await modeller.ended(runId)).toMatchObject({ state: 'succeeded', kind: 'sample.quality' });
  const { report } = await state();
  if (!report) throw new Error('No report was made');
  return report;
}

const detail = async (column: string): Promise<ColumnQualityDetail> =>
  (await modeller.get(`${path}/quality/column?column=${column}`).expect(200)).body as ColumnQualityDetail;
const raised = (flags: readonly QualityFlag[], column: string | null): string[] =>
  flags.filter((flag) => flag.column === column).map(({ code }) => code);

describe('the quality report of a sample', () => {
  it('waits for a definition, and says so', async () => {
    expect(await state()).toMatchObject({ report: null, definitionId: null, abilities: [] });
    await modeller.post(`${path}/quality`).expect(409);
    await modeller.get(`${path}/quality/column?column=income`).expect(409);
  });

  it('is made with the definition: counts, months, drift, leakage and constant columns, each in a sentence', async () => {
    await define((content) => ({
      ...content,
      columns: content.columns.map((column) =>
        column.column === 'bureau_score'
          ? { ...column, special: [{ label: 'no bureau record', values: [-999] }] }
          : ['fee', 'settled'].includes(column.column)
            ? { ...column, role: 'characteristic' as const }
            : column,
      ),
      partition: { by: 'seed', seed: 7, holdOutShare: 0.3, outOfTime: { from: '2025-01-01', to: null } },
    }));
    const { rows, duplicateRows, months, baseline, columns, flags } = await made();
    expect({ rows, duplicateRows }).toEqual({ rows: applicants.length + 3, duplicateRows: 3 });
    expect(months).toHaveLength(30);
    expect(months[0]).toMatchObject({ month: '2023-01', rows: 123 });
    expect(months[16]).toMatchObject({ month: '2024-05', rows: 0 });
    expect(baseline).toEqual({ from: '2023-01', to: '2023-12', rows: 12 * 120 + 3 });
    expect(raised(flags, null)).toEqual(['duplicate-rows', 'months-without-rows']);

    const column = (name: string) => columns.find((one) => one.column === name)!;
    const none = applicants.filter(({ bureau }) => bureau === -999).length + 1;
    expect(column('bureau_score')).toMatchObject({ special: none, missing: 0, unreadable: 0 });
    // The code is named: nobody is asked about it again.
    expect(raised(flags, 'bureau_score')).not.toContain('special-code-suspected');
    expect(column('fee').missing).toBe(applicants.filter(({ bad }) => bad === 0).length + 2);
    expect(column('income').outliers).toMatchObject({ below: 0, above: 1 });
    expect(raised(flags, 'income')).toContain('outliers');
    expect(raised(flags, 'branch')).toContain('constant');
    expect(raised(flags, 'channel')).toContain('drift');
    expect(raised(flags, 'bureau_score')).not.toContain('drift');
    expect(raised(flags, 'fee')).toEqual(expect.arrayContaining(['leakage-value', 'missing-one-outcome']));
    expect(raised(flags, 'settled')).toEqual(expect.arrayContaining(['leakage-value', 'one-value-per-outcome']));
    expect(raised(flags, 'income')).not.toContain('leakage-value');
    expect(flags.find(({ code }) => code === 'missing-one-outcome')?.finding).toMatch(/^Missing only for goods: /);
  });

  it('compares each month with the first year by the stability index, worked out here from the rows', async () => {
    const { months, groups } = await detail('channel');
    const labels = groups.map(({ label }) => label);
    const shares = (rows: readonly Applicant[]): number[] =>
      labels.map((label) => rows.filter(({ channel }) => channel === label).length);
    const base = shares([...applicants, ...applicants.slice(0, 3)].filter(({ month }) => month < 12));
    const july = shares(applicants.filter(({ month }) => month === 20));
    const sum = (counts: readonly number[]): number => counts.reduce((all, one) => all + one, 0);
    // "telephone" is empty in both: half a row more everywhere would give it a part of its own.
    const expected = labels.reduce((index, _, k) => {
      if (base[k] + july[k] === 0) return index;
      const [e, a] = [base[k] / sum(base), july[k] / sum(july)];
      return index + (a - e) * Math.log(a / e);
    }, 0);
    expect(months[20].groups).toEqual(july);
    expect(months[20].psi).toBeCloseTo(expected, 12);
    expect(months[5].psi).toBeNull();
    const late = shares(applicants.filter(({ month }) => month === 26));
    const smoothed = labels.reduce((index, _, k) => {
      const size = labels.length / 2;
      const [e, a] = [(base[k] + 0.5) / (sum(base) + size), (late[k] + 0.5) / (sum(late) + size)];
      return index + (a - e) * Math.log(a / e);
    }, 0);
    expect(months[26].psi).toBeCloseTo(smoothed, 12);
  });

  it('never tells the outcome of out-of-time rows, covered or opened', async () => {
    const { months, definitionId } = await made();
    const late = months.filter(({ month }) => month >= '2025-01');
    expect(late.length).toBe(6);
    for (const { goods, bads, unknown, rows } of late) expect([goods, bads, unknown]).toEqual([0, 0, rows]);
    const early = [...applicants, ...applicants.slice(0, 3)].filter(({ month }) => month < 24);
    const { groups, histogram } = await detail('income');
    const total = (key: 'goods' | 'bads'): number => groups.reduce((sum, group) => sum + group[key], 0);
    expect([total('goods'), total('bads')]).toEqual([0, 1].map((bad) => early.filter((one) => one.bad === bad).length));
    expect(histogram?.bads.reduce((sum, count) => sum + count, 0)).toBe(total('bads'));
    await modeller
      .post(`/api/sample-definitions/${definitionId}/out-of-time`)
      .send({ reason: 'to see whether the report tells more afterwards' })
      .expect(201);
    expect((await made()).months).toEqual(months);
  });

  it('keeps the answer to a flag, with who and when, in the report and in the record', async () => {
    const answer = { column: 'income', code: 'outliers', answer: 'accepted', reason: 'Confirmed by the branch: sale of a farm.' };
    await modeller.post(`${path}/quality/answers`).send(answer).expect(201);
    const { flags } = await made();
    expect(flags.find(({ column, code }) => column === 'income' && code === 'outliers')?.answer).toMatchObject({
      answer: 'accepted',
      reason: answer.reason,
      by: 'marian',
    });
    const { body } = await modeller.get(`/api/record?modelId=${modelId}&entityId=${sampleId}&limit=50`).expect(200);
    expect(body.entries[0]).toMatchObject({
      action: 'sample.flag-answered',
      after: { column: 'income', code: 'outliers', answer: 'accepted' },
      reason: answer.reason,
    });
    await expect(server.context.sequelize.query('DELETE FROM quality_answers')).rejects.toThrow(/permission denied/);
  });

  it('takes a column out of the next definition when it is answered with "not used"', async () => {
    const reason = 'Charged after the decision.';
    await modeller.post(`${path}/quality/answers`).send({ column: 'fee', code: 'missing-one-outcome', answer: 'not used', reason }).expect(201);
    const { body } = await modeller.get(`${path}/draft`).expect(200);
    const column = (body.content as DraftContent).columns.find((one) => one.column === 'fee');
    expect(column).toMatchObject({ role: 'not used', reason });
    // The definition that is confirmed stays as it is; the next one follows, and answers stay with the sample.
    expect((await made()).columns.find((one) => one.column === 'fee')?.role).toBe('characteristic');
    const before = (await made()).definitionId;
    const definitionId = await define((content) => content);
    const report = await made();
    expect(report).toMatchObject({ definitionId, definitionNumber: 2 });
    expect(report.definitionId).not.toBe(before);
    expect(report.columns.find((one) => one.column === 'fee')?.role).toBe('not used');
    expect(report.flags.find(({ column: name, code }) => name === 'income' && code === 'outliers')?.answer?.answer).toBe('accepted');
  }); // prettier-ignore

  it('refuses answers to what was not raised, without a reason, and from those who only read', async () => {
    const good = { column: 'settled', code: 'leakage-value', answer: 'accepted', reason: 'Known when applying.' };
    for (const wrong of [
      { ...good, code: 'all-missing' },
      { ...good, column: 'nowhere' },
      { ...good, reason: ' ' },
      { ...good, column: null, code: 'duplicate-rows', answer: 'not used' },
    ])
      await modeller.post(`${path}/quality/answers`).send(wrong).expect(422);
    await validator.post(`${path}/quality/answers`).send(good).expect(403);
    await other.post(`${path}/quality/answers`).send(good).expect(404);
    expect((await state(validator)).abilities).toEqual([]);
    await other.get(`${path}/quality`).expect(404);
    await modeller.post(`${path}/quality`).expect(409);
  });
});
