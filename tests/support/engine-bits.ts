import { Engine, codedColumns, type CodedProblem } from '@tallystone/numeric/engine/index';
import type { KernelKind } from '@tallystone/numeric/engine/kernels/kernels';
import { Generator } from '@tallystone/numeric/random/generator';

const ROWS = 6000;

/** A problem made of seeded chance and basic operations alone, so that it is the same everywhere. */
function problem(): CodedProblem {
  const random = new Generator(21);
  const columns = Array.from({ length: 6 }, () => Float64Array.from({ length: ROWS }, () => (random.below(5) - 2) / 4));
  const linear = Float64Array.from({ length: ROWS }, () => random.uniform());
  const outcome = Uint8Array.from({ length: ROWS }, (_, i) =>
    random.uniform() < 0.7 + 0.2 * columns[0][i] + 0.1 * columns[1][i] ? 1 : 0,
  );
  return {
    columns: [...codedColumns(columns), { kind: 'linear', values: linear }],
    outcome,
    penalty: { mixing: 1, standardize: true },
  };
}

/** The bits of a path and a cross-validation, as text. */
export function engineBits(kernels: KernelKind): string {
  const bits: string[] = [];
  const add = (values: ArrayLike<number>): void =>
    void bits.push(Array.from(new Uint32Array(Float64Array.from(values).buffer), (half) => half.toString(16)).join(' '));
  const engine = new Engine(problem(), { kernels, folds: Uint8Array.from({ length: ROWS }, (_, i) => (i % 4) + 1) });
  // A stated grid: an automatic one takes its ratios from the host's exp and log.
  const { fits } = engine.path({ lambdas: [0.05, 0.02, 0.01, 0.005, 0.002, 0.001] }, { tolerance: 1e-9 });
  fits.forEach((fit) => add([fit.intercept, fit.objective, fit.deviance, fit.optimalityResidual, ...fit.coefficients]));
  engine.crossValidate(fits.map(({ lambda }) => lambda)).folds.forEach((fold) => add(fold?.deviance ?? []));
  return bits.join('\n');
}
