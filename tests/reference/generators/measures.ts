/**
 * Makes expected/measures.json: what R, pROC, scikit-learn and SciPy say about the data that check/measures-draw.ts draws from seed 1.
 * Debian: r-base-core r-cran-glmnet r-cran-proc python3-sklearn. Run in the project's folder: npx tsx tests/reference/generators/measures.ts
 */
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { Generator } from '@tallystone/numeric';
import { draw, write } from '../check/measures-draw';
import { answersOfPython, answersOfR, versions } from '../check/programs';

const SEED = 1;
const folder = mkdtempSync(join(tmpdir(), 'tallystone-measures-'));
try {
  write(folder, draw(new Generator(SEED, 1000)));
  const python = answersOfPython('measures.py', folder);
  if (!python) throw new Error('scikit-learn is not here');
  const file = {
    name: 'Metrics, intervals, tests and distributions of drawn data, by other programs',
    source: versions(),
    seed: SEED,
    r: Object.fromEntries(answersOfR('measures.R', folder)),
    python: Object.fromEntries(python),
  };
  writeFileSync(new URL('../expected/measures.json', import.meta.url), JSON.stringify(file, undefined, 1) + '\n');
} finally {
  rmSync(folder, { recursive: true, force: true });
}
