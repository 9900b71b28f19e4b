import { mkdirSync } from 'node:fs';
import { Generator } from '@tallystone/numeric';
import { draw, write } from './measures-draw';
import { compare, ownFigures } from './measures-own';
import { answersOfPython, answersOfR, type Answers } from './programs';
import type { Report } from './report';

/** Which program or package a figure of a script comes from. */
const sourceOf = {
  r: (key: string): string => (/^(delong|paired)/.test(key) ? 'pROC' : 'R'),
  python: (key: string): string => (/^(auc|brier|log-loss|ridge|ks-weighted)/.test(key) ? 'scikit-learn' : 'SciPy'),
};

/** Draws scores, forecasts and counts from the seed and measures them here, with R and pROC, and with scikit-learn and SciPy where they are. */
export function checkMeasures(report: Report, seed: number, folder: string): void {
  mkdirSync(folder, { recursive: true });
  const drawn = draw(new Generator(seed, 1000));
  write(folder, drawn);
  const own = ownFigures(drawn);
  const add = (answers: Answers, source: (key: string) => string): void =>
    compare(drawn, own, answers).forEach(({ key, title, difference, tolerance }) =>
      report.add(title, source(key), difference, tolerance),
    );
  add(answersOfR('measures.R', folder), sourceOf.r);
  const byPython = answersOfPython('measures.py', folder);
  if (byPython) add(byPython, sourceOf.python);
  else report.notChecked("scikit-learn and SciPy (install python3-sklearn from Debian's packages)");
}
