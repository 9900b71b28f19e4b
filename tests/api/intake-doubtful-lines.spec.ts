import type { DoubtfulLines, Preview } from '@tallystone/contracts/samples/reading';
import type { Run } from '@tallystone/contracts/runs/schema';
import { Client } from 'pg';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { IntakeServer, type Visitor } from '../support/intake';

/** Doubtful lines of a file that stand beyond what the preview looks at: found when it is read, and shown as they stand from the raw file alone. */

let server: IntakeServer;
let modeller: Visitor;
let modelId: string;

beforeAll(async () => {
  server = await IntakeServer.start();
  modeller = await server.signIn('marian', 'modeller');
  modelId = await modeller.model();
});
afterAll(() => server.stop());

const rowsBefore = 60_000;
/** More than the preview looks at, without a fault; the line after it has this number. */
const beginning = (end = '\n'): string =>
  `note,amount,bad${end}${Array.from({ length: rowsBefore }, (_, row) => `${'x'.repeat(32)},${row % 900},${row % 2}${end}`).join('')}`;
const firstLine = rowsBefore + 2;
const latin = (text: string): Buffer => Buffer.from(text, 'latin1');

interface Refused {
  readonly path: string;
  readonly run: Run;
  readonly preview: Preview;
  readonly doubtful: DoubtfulLines;
}

const doubtfulOf = async (path: string): Promise<DoubtfulLines> =>
  (await modeller.get(`${path}/doubtful-lines`).expect(200)).body as DoubtfulLines;

/** Reads a file in which the preview sees nothing wrong, and gives what its reading then finds. */
async function refused(bytes: Buffer, choices: Record<string, unknown> = {}, piece?: number): Promise<Refused> {
  const { id } = await modeller.upload(modelId, bytes, 'applicants.csv', piece);
  const path = `/api/models/${modelId}/samples/${id}`;
  const preview = (await modeller.post(`${path}/preview`).send(choices).expect(200)).body as Preview;
  expect(preview).toMatchObject({ problems: [], doubtful: { lines: [], count: 0 }, looked: { whole: false } });
  expect(await doubtfulOf(path)).toEqual({ lines: [], count: 0 });
  const started = await modeller.post(`${path}/readings`).send(preview.choices).expect(202);
  const run = await modeller.ended((started.body as Run).id);
  expect(run).toMatchObject({ state: 'failed', problem: { code: 'file-refused' } });
  return { path, run, preview, doubtful: await doubtfulOf(path) };
}

describe('doubtful lines beyond what the preview looks at', () => {
  it.each([
    ['a ragged row', 'utf-8', latin('Old Mill Lane,12\n'), 'Old Mill Lane,12', '2 fields where the header has 3'],
    ['bytes that are not UTF-8', 'utf-8', latin('M\xe1laga,12,1\n'), 'M\\xE1laga,12,1', 'not UTF-8'],
    ['a byte that Windows-1252 does not have', 'windows-1252', latin('M\x81laga,12,1\n'), 'M\\x81laga,12,1', 'not Windows-1252'],
    ['a quote that is never closed', 'utf-8', latin('"Old Mill Lane,12,1\n3,4,0\n'), '"Old Mill Lane,12,1', 'a quote that is never closed'],
    ['text after a quote', 'utf-8', latin('"Old Mill" Lane,12,1\n'), '"Old Mill" Lane,12,1', 'text after a closing quote'],
    ['a NUL', 'utf-8', latin('Old Mill Lane,1\0,1\n'), 'Old Mill Lane,1\\0,1', 'column 2 ("amount") contains a NUL byte'],
    ['a character that was lost', 'utf-8', Buffer.from('M\ufffdlaga,12,1\n'), 'M\ufffdlaga,12,1', 'a character that was lost before (U+FFFD)'],
  ] as const)('come with line, record and text: %s', async (_, encoding, line, text, doubt) => {
    const bytes = Buffer.concat([latin(beginning()), latin('y,1,0\n'), line]);
    const { doubtful, run } = await refused(bytes, { encoding });
    expect(doubtful).toEqual({ count: 1, lines: [{ line: firstLine + 1, record: rowsBefore + 2, text, clipped: false, doubts: [doubt] }] });
    expect(JSON.stringify(run)).not.toContain('Mill');
  }, 60_000); // prettier-ignore

  it('are those of the whole file together, in its order, the first fifty with two hundred characters each', async () => {
    const long = 'z'.repeat(300);
    const tail = `y,1\n"a\nb",1,0\nM\xe1laga,12,1\n\ny,1,0\n${`${long},1\n`.repeat(70)}"Old Mill Lane,12,1\n`;
    const { doubtful } = await refused(latin(beginning() + tail), { encoding: 'utf-8' });
    expect(doubtful.count).toBe(74);
    expect(doubtful.lines).toHaveLength(50);
    expect(doubtful.lines.slice(0, 4)).toEqual([
      { line: firstLine, record: rowsBefore + 1, text: 'y,1', clipped: false, doubts: ['2 fields where the header has 3'] },
      { line: firstLine + 3, record: rowsBefore + 3, text: 'M\\xE1laga,12,1', clipped: false, doubts: ['not UTF-8'] },
      { line: firstLine + 4, record: rowsBefore + 4, text: '', clipped: false, doubts: ['1 field where the header has 3'] },
      { line: firstLine + 6, record: rowsBefore + 6, text: 'z'.repeat(200), clipped: true, doubts: ['2 fields where the header has 3'] },
    ]); // prettier-ignore
    expect(doubtful.lines.map(({ line }) => line)).toEqual([0, 3, 4, ...Array.from({ length: 47 }, (_, place) => place + 6)].map((line) => firstLine + line)); // prettier-ignore
  }, 60_000);

  it.each(['utf-8', 'utf-16le', 'utf-16be'] as const)('are whole where they lie in two pieces of the stored file: %s', async (encoding) => {
    const make = (text: string): Buffer => {
      if (encoding === 'utf-8') return Buffer.from(text);
      const wide = Buffer.from(`\ufeff${text}`, 'utf16le');
      return encoding === 'utf-16be' ? wide.swap16() : wide;
    };
    const before = make(beginning('\r\n')).length;
    const bytes = make(`${beginning('\r\n')}Größe €,1\r\n${'y,1,0\r\n'.repeat(9)}"Old\r\nMill,1\r\n`);
    // Cut within the first character of more than one byte; and between CR and LF before it.
    for (const piece of [before + make('Gr').length + 1, before - (encoding === 'utf-8' ? 1 : 2)]) {
      const { doubtful } = await refused(bytes, {}, piece);
      expect(doubtful).toMatchObject({
        count: 2,
        lines: [{ line: firstLine, record: rowsBefore + 1, text: 'Größe €,1' }, { line: firstLine + 10, record: rowsBefore + 11, text: '"Old' }],
      });
    }
  }, 120_000); // prettier-ignore

  it('are of the last reading under its own choices, and gone once the file was read', async () => {
    const bytes = latin(`${beginning()}M\xe1laga,12,1\n`);
    const { path } = await refused(bytes, { encoding: 'utf-8' });
    const { choices } = (await modeller.post(`${path}/preview`).send({ encoding: 'windows-1252' }).expect(200)).body as Preview;
    const read = async (encoding: string): Promise<string> => {
      const { body } = await modeller.post(`${path}/readings`).send({ ...choices, encoding }).expect(202); // prettier-ignore
      return (await modeller.ended((body as Run).id)).state;
    };
    expect(await read('windows-1252')).toBe('succeeded');
    expect(await doubtfulOf(path)).toEqual({ lines: [], count: 0 });
    // The sample keeps the reading that it has; what is doubtful is told of the one that was refused.
    expect(await read('utf-8')).toBe('failed');
    expect((await modeller.get(path).expect(200)).body).toMatchObject({ state: 'ready', reading: { encoding: 'windows-1252' } });
    expect(await doubtfulOf(path)).toMatchObject({ count: 1, lines: [{ line: firstLine, text: 'M\\xE1laga,12,1' }] });
  }, 60_000);

  it('stand in the raw file alone, for those who work on the model, and go with the rows', async () => {
    const { path, run, doubtful } = await refused(latin(`${beginning()}Old Mill Lane,12\n"Quince Yard,12,1\n`));
    expect(doubtful.lines.map(({ text }) => text)).toEqual(['Old Mill Lane,12', '"Quince Yard,12,1']);
    const owner = new Client({ connectionString: server.database.ownerUrl });
    await owner.connect();
    try {
      const { rows: tables } = await owner.query<{ name: string }>(
        `SELECT format('%I.%I', table_schema, table_name) AS name FROM information_schema.tables
          WHERE table_type = 'BASE TABLE' AND table_schema NOT IN ('pg_catalog', 'information_schema') ORDER BY 1`,
      );
      const holding = async (words: string): Promise<string[]> => {
        const found: string[] = [];
        for (const { name } of tables) {
          const { rowCount } = await owner.query(`SELECT 1 FROM ${name} AS t WHERE t::text LIKE $1 LIMIT 1`, [`%${words}%`]);
          if (rowCount !== 0) found.push(name);
        }
        return found;
      };
      expect(await holding('Mill Lane')).toEqual([]);
      expect(await holding('Quince')).toEqual([]);
      // That this would find it: what is said of the lines stands with the sample.
      expect(await holding('2 fields where the header has 3')).toContain('public.samples');
      expect(await holding(run.id)).toContain('public.runs');

      const another = await server.signIn('mo', 'modeller');
      const validator = await server.signIn('vera', 'validator');
      await another.get(`${path}/doubtful-lines`).expect(404);
      await validator.get(`${path}/doubtful-lines`).expect(403);

      const admin = await server.signIn('ada', 'admin');
      const reason = 'Retention of applicants’ data ended after seven years';
      await admin.post(`${path}/erasure`).send({ reason, fileName: 'applicants.csv' }).expect(204);
      const { body } = await modeller.get(`${path}/doubtful-lines`).expect(409);
      expect(body).toMatchObject({ code: 'rows-erased' });
      const { rows: kept } = await owner.query('SELECT doubtful FROM samples WHERE id = $1', [path.split('/').at(-1)]);
      expect(kept).toEqual([{ doubtful: null }]);
    } finally {
      await owner.end();
    }
  }, 60_000);
});
