/**
 * Times how a large file is read: uploaded through the product's own upload, then parsed, stored and profiled by a real worker, beside
 * PostgreSQL's own COPY of the same file into typed columns and pandas' read_csv.
 *
 * What it says: `seconds` are those of parsing and storing, from the start of the reading to where every column is stored, and `ratio` is theirs to what
 * COPY and read_csv take, which profile nothing either; `profileSeconds` are those of the profiles that follow, `secondsInAll` those of the whole run,
 * which is what a person waits for. `cpuSeconds` (the worker's, with all its threads) and `peakMemoryMB` (the worker's) are of the whole run.
 *
 *   npm run bench:intake -- --rows 1000000 --columns 100          in words
 *   npm run bench:intake -- --rows 1000000 --columns 100 --json   one JSON object on standard output
 *   ... --alone   without the other two; --keep   leaves the data folder and says where it is; --profile DIR   CPU profiles of the worker
 *
 * Everything runs on a PostgreSQL of its own, with the settings that `npm start` gives it.
 */
import { createHash } from 'node:crypto';
import { closeSync, mkdtempSync, openSync, readSync, chmodSync, rmSync, statSync, writeSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { startPostgres, stopPostgres } from '../../../tools/postgres.mjs';
import { ensureBuilt } from '../../../tools/build.mjs';
import { mixedColumns, mixedFile } from './mixed-file';
import { timeCopy, timeReadCsv } from './others';
import { timeOurs } from './ours';

const args = process.argv.slice(2);
const option = (name: string, usual: number): number => Number(args.includes(name) ? args[args.indexOf(name) + 1] : usual);
const rows = option('--rows', 1_000_000);
const count = option('--columns', 100);
const json = args.includes('--json');
const alone = args.includes('--alone');
const profileFolder = args.includes('--profile') ? args[args.indexOf('--profile') + 1] : null;
const say = (line: string): void => console.error(line);

await ensureBuilt('server', { say });
const folder = mkdtempSync(join(tmpdir(), 'tallystone-bench-'));
// The server reads the file itself when it copies, as an account of its own.
chmodSync(folder, 0o755);
try {
  const columns = mixedColumns(count);
  const path = join(folder, 'applications.csv');
  const sha256 = writeFile(path);
  const { size: bytes } = statSync(path);
  say(`${rows} rows, ${count} columns, ${(bytes / 1e6).toFixed(1)} MB`);

  const data = join(folder, 'data');
  const addresses = await startPostgres({ data, port: 0, say });
  try {
    const ours = await timeOurs({ addresses, data, path, bytes, sha256, rows, columns: count, profileFolder, say });
    say(
      `read and stored in ${ours.seconds.toFixed(2)} s, profiled in ${ours.profileSeconds.toFixed(2)} s more: ${ours.secondsInAll.toFixed(2)} s in all`,
    );
    const copySeconds = alone ? null : await timeCopy(addresses.superuserUrl, path, columns);
    if (copySeconds !== null) say(`COPY ${copySeconds.toFixed(2)} s`);
    const readCsvSeconds = alone ? null : timeReadCsv(path, say);
    if (readCsvSeconds !== null) say(`read_csv ${readCsvSeconds.toFixed(2)} s`);
    const result = {
      rows,
      columns: count,
      bytes,
      seconds: ours.seconds,
      profileSeconds: ours.profileSeconds,
      secondsInAll: ours.secondsInAll,
      cpuSeconds: ours.cpuSeconds,
      copySeconds,
      readCsvSeconds,
      ratio: {
        copy: copySeconds === null ? null : ours.seconds / copySeconds,
        readCsv: readCsvSeconds === null ? null : ours.seconds / readCsvSeconds,
      },
      peakMemoryMB: ours.peakMemoryMB,
      storedShare: ours.storedBytes / bytes,
    };
    console.log(json ? JSON.stringify(result) : result);
  } finally {
    await stopPostgres({ data });
  }
} finally {
  if (args.includes('--keep')) say(`left in ${folder}`);
  else rmSync(folder, { recursive: true, force: true });
}

function writeFile(path: string): string {
  const file = openSync(path, 'w', 0o644);
  const hash = createHash('sha256');
  for (const piece of mixedFile(rows, mixedColumns(count))) {
    writeSync(file, piece);
    hash.update(piece);
  }
  closeSync(file);
  // Read once, so that nobody pays for the first time.
  const again = openSync(path, 'r');
  const buffer = Buffer.alloc(1 << 22);
  while (readSync(again, buffer) > 0);
  closeSync(again);
  return hash.digest('hex');
}
