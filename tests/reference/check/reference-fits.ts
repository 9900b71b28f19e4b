import { existsSync } from 'node:fs';
import { basename, join, resolve } from 'node:path';
import { pathToFileURL } from 'node:url';
import {
  fitAt,
  fitIndependently,
  fitPath,
  nullDeviance,
  objective,
  optimalityResidual,
  standardErrors,
  type FitProblem,
} from '@tallystone/numeric';
import { needOtherData, problemOf, referenceFits } from '../penalised-fits';
import { Table, expected } from '../reference-data';
import { Largest, orOne, type Report } from './report';

/** Finds data files by name in a folder, its `data` and its `fetched`. */
export class DataFolder {
  private readonly tables = new Map<string, Table>();

  constructor(private readonly folder: string) {}

  private find(name: string): string | undefined {
    return ['', 'data', 'fetched']
      .map((part) => resolve(join(this.folder, part, basename(name))))
      .find((file) => existsSync(file));
  }

  has(name: string): boolean {
    return this.find(name) !== undefined;
  }

  table(name: string): Table {
    const file = this.find(name);
    if (file === undefined) throw new Error(`${basename(name)} is not in ${this.folder}`);
    const table = this.tables.get(file) ?? new Table(pathToFileURL(file));
    this.tables.set(file, table);
    return table;
  }
}

const GLMNET = 'glmnet 4.1-6, Newton solve (penalised_logistic_fits.json)';
const GLM = 'R 4.2.2 glm (published_logistic_tables.json)';

/** The penalised fits whose rows may not be passed on: coefficients, objective, deviance and residual at every lambda, by both methods. */
export function checkReferenceFits(report: Report, folder: DataFolder | undefined): void {
  for (const reference of referenceFits.filter(({ id }) => needOtherData.includes(id))) {
    if (!folder?.has(reference.data)) {
      report.notChecked(`${reference.id} (give a folder that holds ${basename(reference.data)} with --data)`);
      continue;
    }
    const { problem, sign } = problemOf(reference, (name) => folder.table(name));
    const path = fitPath(problem, { lambdas: reference.lambda_path.map(({ lambda }) => lambda) });
    const coefficients = new Largest();
    const objectives = new Largest();
    const deviances = new Largest();
    const residuals = new Largest();
    deviances.see(path.nullDeviance, reference.null_deviance, reference.null_deviance);
    path.fits.forEach((fit, k) => {
      const point = reference.lambda_path[k];
      coefficients.see(sign * fit.intercept, point.intercept);
      coefficients.all(
        fit.coefficients.map((b) => sign * b),
        point.coef,
      );
      objectives.see(fit.objective, point.objective, point.objective);
      objectives.see(objective(problem, fit), point.objective, point.objective);
      deviances.see(fit.deviance, point.deviance, point.deviance);
      residuals.see(fit.status === 'converged' ? optimalityResidual(problem, fit) : NaN, 0);
    });
    const rows = `${reference.id}, ${reference.n} x ${reference.x.length}`;
    report.add(`${rows}: coefficients`, GLMNET, coefficients.value, 1e-6);
    report.add(`${rows}: objective, relative`, GLMNET, objectives.value, 1e-10);
    report.add(`${rows}: deviance, relative`, GLMNET, deviances.value, 1e-8);
    report.add(`${rows}: optimality residual`, 'definition', residuals.value, 1e-9);
    if (reference.n <= 1000) {
      const second = new Largest();
      const point = reference.lambda_path[2];
      const fit = fitIndependently(problem, point.lambda, { tolerance: 1e-9 });
      second.all([sign * fit.intercept, ...fit.coefficients.map((b) => sign * b)], [point.intercept, ...point.coef]);
      report.add(`${rows}: second method`, GLMNET, second.value, 1e-6);
    }
  }
}

interface PublishedFit {
  readonly id: string;
  readonly published_estimate: number[];
  readonly published_se: number[];
  readonly computed_R_glm: {
    readonly term: string[];
    readonly estimate: number[];
    readonly se: number[];
    readonly deviance: number;
    readonly null_deviance: number;
  };
}

/** Tables 4.2 and 4.3 of Hastie, Tibshirani and Friedman, 2nd ed. 2009 (printed figures from memory), on the South African heart data. */
export function checkPublishedTables(report: Report, folder: DataFolder | undefined): void {
  const { fits } = expected<{ fits: PublishedFit[] }>('published_logistic_tables.json');
  for (const reference of fits.filter(({ id }) => id.startsWith('saheart'))) {
    if (!folder?.has('saheart.csv')) {
      report.notChecked(`${reference.id} (give a folder that holds saheart.csv with --data)`);
      continue;
    }
    const table = folder.table('saheart.csv');
    const glm = reference.computed_R_glm;
    const problem: FitProblem = {
      columns: glm.term.slice(1).map((name) => table.numbers(name)),
      outcome: table.goods('chd'),
      penalty: { mixing: 1, standardize: true },
    };
    const fit = fitAt(problem, 0, { tolerance: 1e-12 });
    const errors = standardErrors(problem, fit);
    const estimates = [-fit.intercept, ...fit.coefficients.map((b) => -b)];
    const deviations = [errors.intercept, ...errors.coefficients];
    const tight = new Largest();
    tight.all(estimates, glm.estimate);
    tight.all(deviations, glm.se, orOne);
    tight.all([fit.deviance, nullDeviance(problem)], [glm.deviance, glm.null_deviance]);
    report.add(`${reference.id}: estimates, errors, deviances`, GLM, fit.status === 'converged' ? tight.value : NaN, 1e-8);
    // Three decimals are printed.
    const printed = new Largest();
    printed.all(estimates, reference.published_estimate);
    printed.all(deviations, reference.published_se);
    report.add(`${reference.id}: printed figures`, 'Hastie et al. 2009, from memory', printed.value, 5e-4 + 1e-9);
  }
}
