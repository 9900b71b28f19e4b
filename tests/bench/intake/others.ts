import { spawnSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { Client } from 'pg';
import type { MixedColumn } from './mixed-file';

/** What the product is measured against. */

/** Debian's packages belong to Debian's own Python, which need not be the first on the path. */
const debianPython = '/usr/bin/python3';

/** Seconds that PostgreSQL's COPY takes to bring the file into a table of typed columns, to the end of its commit. */
export async function timeCopy(superuserUrl: string, path: string, columns: readonly MixedColumn[]): Promise<number> {
  const client = new Client({ connectionString: superuserUrl });
  await client.connect();
  try {
    await client.query('CREATE SCHEMA copied');
    await client.query(`CREATE TABLE copied.applications (${columns.map(({ name, type }) => `"${name}" ${type}`).join(', ')})`);
    const began = performance.now();
    await client.query(`COPY copied.applications FROM '${path.replaceAll("'", "''")}' WITH (FORMAT csv, HEADER)`);
    const seconds = (performance.now() - began) / 1000;
    await client.query('DROP SCHEMA copied CASCADE');
    return seconds;
  } finally {
    await client.end();
  }
}

/** Seconds that pandas.read_csv takes (Debian's python3-pandas), its import not counted; null where it is not installed. */
export function timeReadCsv(path: string, say: (line: string) => void): number | null {
  const program = [
    'import sys, time, pandas',
    'began = time.perf_counter()',
    'pandas.read_csv(sys.argv[1])',
    'print(time.perf_counter() - began)',
  ].join('\n');
  // A session of its own, as the others have (Linux shares a busy machine out by sessions).
  const python = existsSync(debianPython) ? debianPython : 'python3';
  const done = spawnSync('setsid', ['--wait', python, '-c', program, path], { encoding: 'utf8' });
  if (done.status === 0) return Number(done.stdout);
  say(`pandas is not there (Debian: python3-pandas), its ratio is left out: ${done.stderr.trim().split('\n').at(-1) ?? ''}`);
  return null;
}
