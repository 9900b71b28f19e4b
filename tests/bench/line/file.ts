import { closeSync, openSync, writeSync } from 'node:fs';
import { createHash } from 'node:crypto';
import { mixedColumns, type MixedColumn } from '../intake/mixed-file';

/** Park and Miller 1988, as in the mixed file. */
function chances(seed: number): () => number {
  let state = seed;
  return () => (state = (state * 48_271) % 2_147_483_647) / 2_147_483_647;
}

/** What the invented outcome depends on; the rest of the columns say nothing. */
const risk: Readonly<Record<string, (field: string) => number>> = {
  arrears_1: (field) => 0.35 * Number(field),
  score_1: (field) => (field === '-999' ? 0.5 : (640 - Number(field)) / 110),
  utilisation_1: (field) => 0.9 * Number(field),
  missed_1: (field) => 0.5 * Math.min(3, Number(field)),
  months_on_book_1: (field) => (field === '' ? 0.3 : -Number(field) / 300),
  housing_1: (field) => (field === 'owner' ? -0.4 : field === 'tenant' ? 0.3 : 0),
  searches_1: (field) => 0.08 * Math.min(10, Number(field)),
};

/**
 * Writes the mixed file with an outcome that a scorecard can find something in: 0, 1, and 2 for those of whom nobody can tell.
 *
 * @param indeterminate share of the rows that are neither good nor bad, whatever else they are
 * @returns SHA-256 of the bytes
 */
export function writeLineFile(path: string, rows: number, count: number, indeterminate = 0): string {
  const columns: MixedColumn[] = mixedColumns(count);
  const random = chances(12_345);
  const toss = chances(54_321);
  const unknown = chances(98_765);
  const effects = columns.flatMap(({ name }, j) => (name in risk ? [{ j, effect: risk[name] }] : []));
  const hash = createHash('sha256');
  const file = openSync(path, 'w');
  const write = (text: string): void => {
    const bytes = Buffer.from(text, 'latin1');
    hash.update(bytes);
    writeSync(file, bytes);
  };
  let text = `${columns.map(({ name }) => name).join(',')}\n`;
  for (let row = 0; row < rows; row++) {
    const fields = columns.map(({ field }) => field(random, row));
    const eta = effects.reduce((sum, { j, effect }) => sum + effect(fields[j]), -3.9);
    fields[fields.length - 1] = toss() < 1 / (1 + Math.exp(-eta)) ? '1' : '0';
    if (indeterminate > 0 && unknown() < indeterminate) fields[fields.length - 1] = '2';
    text += `${fields.join(',')}\n`;
    if (text.length >= 8 << 20) {
      write(text);
      text = '';
    }
  }
  write(text);
  closeSync(file);
  return hash.digest('hex');
}
