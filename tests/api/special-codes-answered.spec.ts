import type { DefinedColumn, Draft, DraftContent } from '@tallystone/contracts/samples/definition';
import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { applicantsWithRisk } from '../support/binned';
import { IntakeServer, type Visitor } from '../support/intake';

/** No definition is confirmed while a code has no meaning, or while nobody has said whether a suspected one is a code or an amount. */
let server: IntakeServer;
let modeller: Visitor;
let modelId: string;
let path: string;

beforeAll(async () => {
  server = await IntakeServer.start();
  modeller = await server.signIn('marian', 'modeller');
  modelId = await modeller.model();
  path = (await modeller.sample(modelId, applicantsWithRisk(600))).path;
}, 120_000);
afterAll(() => server.stop());

const say = async (answer: Partial<DefinedColumn>): Promise<Draft> => {
  const { body, headers } = await modeller.get(`${path}/draft`).expect(200);
  const { content } = body as Draft;
  const next: DraftContent = {
    ...content,
    columns: content.columns.map((column) =>
      column.column === 'utilisation' ? { ...column, special: [], amounts: [], ...answer } : column,
    ),
  };
  return (await modeller.put(`${path}/draft`).set('If-Match', headers.etag).send(next).expect(200)).body as Draft;
};
const refused = async ({ revision }: Draft): Promise<ProblemItem[]> =>
  ((await modeller.post(`${path}/definitions`).send({ revision }).expect(422)).body as { problems: ProblemItem[] }).problems;

describe('special codes at the confirmation', () => {
  it('that are suspected are to be answered, with their count', async () => {
    const [problem, ...others] = await refused(await say({ role: 'characteristic' }));
    expect(others).toEqual([]);
    expect(problem).toMatchObject({
      code: 'special-code-suspected',
      where: { section: 'columns', column: 'utilisation', value: '-999' },
    });
    expect(problem.message).toMatch(
      /^utilisation is -999 in \d+ rows, which looks like a special code\. Say what it means, or that it is an amount\.$/,
    );
  });

  it('that nobody has named are refused, with column and code', async () => {
    for (const label of ['meaning to be stated', ' meaning to be stated '])
      expect(await refused(await say({ special: [{ label, values: [-999] }] }))).toEqual([
        {
          code: 'special-unnamed',
          message: 'utilisation: say what the special code -999 means.',
          where: { section: 'columns', column: 'utilisation', value: '-999' },
        },
      ]);
  });

  it('ask nobody of a column that takes no part', async () => {
    const { problems } = await say({ role: 'not used', reason: 'not at application' });
    expect(problems).toEqual([]);
  });

  it('may be amounts: that answer is kept with the definition and carried to the next sample', async () => {
    const saved = await say({ role: 'characteristic', reason: null, amounts: ['-999'] });
    expect(saved.problems).toEqual([]);
    const started = await modeller.post(`${path}/definitions`).send({ revision: saved.revision }).expect(202);
    const { definitionId } = (await modeller.ended(started.body.id as string)).result as { definitionId: string };
    const { body } = await modeller.get(`${path}/definitions/${definitionId}`).expect(200);
    const kept = (body as { content: DraftContent }).content.columns.find(({ column }) => column === 'utilisation');
    expect(kept?.amounts).toEqual(['-999']);
    const next = await modeller.sample(modelId, applicantsWithRisk(601));
    const { content } = (await modeller.get(`${next.path}/draft`).expect(200)).body as Draft;
    expect(content.columns.find(({ column }) => column === 'utilisation')?.amounts).toEqual(['-999']);
  });
});
