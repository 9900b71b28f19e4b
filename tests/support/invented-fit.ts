import { fastCrossValidation, fastPath } from '@tallystone/numeric/engine/dispatch';
import { Generator } from '@tallystone/numeric/random/generator';

export interface InventedOrder {
  readonly rows: number;
  readonly columns: number;
  readonly seed: number;
}

export interface InventedFit {
  readonly solver: string;
  readonly seconds: number;
  readonly lambdas: number[];
  readonly intercepts: number[];
  readonly coefficients: number[][];
  readonly largestResidual: number;
  readonly minimum: number;
  readonly oneStandardError: number;
  readonly means: number[];
}

/** A lasso path and its cross-validation on invented binned applicants, made from a seed: pure arithmetic, so that two machines can be compared. */
export function fitInvented({ rows, columns, seed }: InventedOrder): InventedFit {
  const random = new Generator(seed);
  const made = Array.from({ length: columns }, () => new Float64Array(rows));
  const outcome = new Uint8Array(rows);
  for (let i = 0; i < rows; i++) {
    // Sums and products alone: an exponential may differ in its last digit from one engine of JavaScript to another.
    let score = 1.2;
    const common = random.uniform();
    for (let j = 0; j < columns; j++) {
      const bin = Math.floor((0.6 * random.uniform() + 0.4 * common) * 8);
      made[j][i] = (bin - 3) / 4;
      if (j % 2 === 0) score += made[j][i] * 0.4;
    }
    const odd = score / (1 + Math.abs(score));
    outcome[i] = random.uniform() < 0.5 + odd / 2 ? 1 : 0;
  }
  const began = performance.now();
  const problem = { columns: made, outcome, penalty: { mixing: 1, standardize: true } };
  const path = fastPath(problem, { count: 100, smallestRatio: 1e-4, earlyStop: true });
  const folds = Uint8Array.from(outcome, (_, i) => (i % 10) + 1);
  const lambdas = path.fits.map(({ lambda }) => lambda);
  const validated = fastCrossValidation(problem, folds, lambdas, { path: path.fits });
  return {
    solver: `${path.solver}, ${validated.solver}`,
    seconds: (performance.now() - began) / 1000,
    lambdas,
    intercepts: path.fits.map(({ intercept }) => intercept),
    coefficients: path.fits.map(({ coefficients }) => Array.from(coefficients)),
    largestResidual: Math.max(...path.fits.map(({ optimalityResidual }) => optimalityResidual)),
    minimum: validated.minimum,
    oneStandardError: validated.oneStandardError,
    means: validated.mean,
  };
}
