/**
 * Checks what the tests cannot carry: fits of data that may not be passed on (`--data`), and everything else against R, glmnet, pROC, scikit-learn and
 * SciPy on data drawn afresh from a seed (`--seed`, else a new one each time). Prints a table; exit code 1 when a line of it failed.
 */
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { parseArgs } from 'node:util';
import { checkFreshFits, checkGivenData } from './fresh-fits';
import { checkMeasures } from './measures';
import { versions } from './programs';
import { DataFolder, checkPublishedTables, checkReferenceFits } from './reference-fits';
import { Report } from './report';

const { values } = parseArgs({ options: { data: { type: 'string' }, seed: { type: 'string' } } });
const seed = values.seed === undefined ? Math.floor(Math.random() * 2 ** 31) : Number(values.seed);
if (!Number.isSafeInteger(seed) || seed < 0) throw new Error(`--seed ${values.seed} is no whole number of at least 0`);

console.log(`Compared with ${versions()}\nSeed of the fresh data: ${seed}\n`);
const report = new Report();
const folder = values.data === undefined ? undefined : new DataFolder(resolve(process.env['INIT_CWD'] ?? '.', values.data));
checkReferenceFits(report, folder);
checkPublishedTables(report, folder);
const drawn = mkdtempSync(join(tmpdir(), 'tallystone-check-'));
try {
  checkGivenData(report, folder, join(drawn, 'given'));
  checkFreshFits(report, seed, join(drawn, 'fits'));
  checkMeasures(report, seed, join(drawn, 'metrics'));
} finally {
  rmSync(drawn, { recursive: true, force: true });
}
console.log(report.text());
process.exitCode = report.failed.length === 0 ? 0 : 1;
