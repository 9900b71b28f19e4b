import type { FitSettings } from '@tallystone/contracts/specification/types';
import { drawPenaltyPath, mostRows, penaltyPathHeight } from '../charts/penalty-path';
import { fixed, intervalText, percent, plural, significant, timeText, whole } from '../number-texts';
import type { Writer } from '../page/writer';
import { classingName, inferenceText, penaltyName, ruleName } from './wording';

/** 9 Method and selection. */
export function writeMethod(writer: Writer): void {
  const { input } = writer;
  const { result, specification } = input;
  const { fit } = specification;
  writer.beginSection('9', 'Method and selection');
  writer.text(
    'Penalised logistic regression of good against bad, the linear predictor being ln(good:bad) odds. The coefficients minimise the weighted mean of log(1 + e^η) − yη plus λ Σ m [ α |t| + (1 − α)/2 t² ] over the characteristics, with t the coefficient' +
      `${fit.standardize ? ' times the standard deviation of its column' : ''}, m its penalty multiplier and α the mixing; the intercept is not penalised (Tibshirani 1996; Hoerl and Kennard 1970; Zou and Hastie 2005; path by coordinate descent after Friedman, Hastie and Tibshirani 2010).`,
  );
  const declinedMethod = specification.declined?.method ?? 'none';
  writer.facts([
    ['Penalty', penaltyName(result.mixing)],
    ['Penalty chosen', `${significant(result.lambda, 6)} by the ${ruleName[fit.choose]} ${writer.cite(input.resultEvidence)}`],
    ['Penalties tried', lambdaText(fit, result.path.length)],
    ['Standardised', fit.standardize ? 'yes, each column by its weighted standard deviation' : 'no'],
    ['Folds', foldsText(fit)],
    [
      'Refit',
      fit.refit === null
        ? 'none'
        : fit.refit === 'kept'
          ? 'unpenalised on what was kept'
          : 'with the chosen penalty on all partitions',
    ],
    ['Weights', specification.weight === null ? 'none' : specification.weight.column],
    [
      'Prior correction',
      specification.priorCorrection === null
        ? 'none'
        : `to a bad rate of ${percent(specification.priorCorrection.populationBadRate)}: see section 7`,
    ],
    ['Recalibration', specification.recalibration === null ? 'none' : 'intercept and slope refitted on hold-out, before scaling'],
    ['Reject inference', inferenceText(specification.declined)],
    ['Solver', `${result.solver.name} ${result.solver.version}`],
  ]);
  writer.text(
    `The solver ${result.converged ? 'converged' : 'did not converge'}: optimality residual ${significant(result.optimalityResidual)} (the largest violation of the conditions that the minimum must meet; at most 1e−9 is asked of a chosen fit), objective ${fixed(result.objective, 6)}, deviance ${fixed(result.deviance, 2)} ${writer.cite(input.resultEvidence)}.`,
  );
  if (!result.converged || result.optimalityResidual > 1e-9)
    writer.caution(
      'The optimality residual is above what is asked of a chosen fit: its coefficients are not the minimum to that precision.',
    );

  if (declinedMethod !== 'none')
    writer.caution(
      'Declined applications enter WOE and fit by inference, under assumptions that cannot be tested on accepted applications: see section 7. Performance is measured on known outcomes alone.',
    );

  writer.heading('Penalty path');
  if (result.path.length < 2) writer.notEvidenced('Penalty path (the fit was made at one penalty)');
  else {
    writer.figure(
      'Deviance, coefficients and what is kept along the penalty path',
      input.resultEvidence,
      {
        height: penaltyPathHeight(result),
        alt: pathInWords(writer),
        finding: pathInWords(writer),
      },
      (box) => drawPenaltyPath(writer.sheet, box, result, (column) => writer.label(column)),
    );
    writer.note(
      'Strong penalties at the left. Band: one standard error either side of the cross-validated deviance. Strokes: penalties at which a characteristic is in the model; dark lines and strokes are those kept at the chosen penalty.' +
        strokesShown(result.characteristics.length),
    );
  }
  writeCrossValidation(writer);
  writeChoice(writer);
  writeStability(writer);
  writer.authorTexts(9, ['Why this penalty']);
}

/** Where there is no room for every characteristic, how many have a row of strokes. */
const strokesShown = (count: number): string =>
  count > mostRows ? ` The first ${whole(mostRows)} of ${whole(count)} to enter have a row of strokes.` : '';

function lambdaText(fit: FitSettings, made: number): string {
  const { lambda } = fit;
  if ('value' in lambda) return `one, ${significant(lambda.value, 6)}`;
  if ('grid' in lambda) return `${plural(lambda.grid.length, 'stated value')}`;
  return `${whole(made)} of ${whole(lambda.count)} on a logarithmic grid down to ${significant(lambda.smallestRatio)} of the largest${made < lambda.count ? '; stopped early where the deviance gained no more' : ''}`;
}

function foldsText(fit: FitSettings): string {
  const { folds } = fit;
  if (folds === null) return 'no cross-validation';
  const classing = classingName[folds.classing];
  if ('column' in folds) return `from the column ${folds.column}; ${classing}`;
  return `${whole(folds.count)}, seed ${folds.seed}${folds.groups === null ? '' : `, kept together by ${folds.groups}`}; ${classing}`;
}

function pathInWords(writer: Writer): string {
  const { result } = writer.input;
  const strongest = result.path[0];
  const weakest = result.path[result.path.length - 1];
  const counts = (entry: typeof strongest): number =>
    Object.values(entry.coefficients).filter((value) => [value].flat().some((number) => number !== 0)).length;
  return `From penalty ${significant(strongest.lambda)} to ${significant(weakest.lambda)} the model grows from ${whole(counts(strongest))} to ${plural(counts(weakest), 'characteristic')}; at the chosen ${significant(result.lambda)} it keeps ${whole(result.kept)}.`;
}

function writeCrossValidation(writer: Writer): void {
  const { input } = writer;
  const { crossValidation, lambda } = input.result;
  writer.heading('Cross-validation');
  if (crossValidation === null) {
    writer.notEvidenced('Cross-validation');
    return;
  }
  const chosen = crossValidation.lambda.reduce(
    (best, value, index) => (Math.abs(value - lambda) < Math.abs(crossValidation.lambda[best] - lambda) ? index : best),
    0,
  );
  const row = (title: string, index: number): { cells: string[] } => ({
    cells: [
      title,
      significant(crossValidation.lambda[index], 6),
      fixed(crossValidation.mean[index], 5),
      fixed(crossValidation.standardError[index], 5),
    ],
  });
  writer.table('Cross-validated mean deviance', input.resultEvidence, {
    columns: [
      { title: 'Penalty', grow: 1 },
      { title: 'Value', align: 'right' },
      { title: 'Mean deviance', align: 'right' },
      { title: 'Standard error', align: 'right' },
    ],
    rows: [
      row('Smallest mean deviance', crossValidation.minimum),
      row('One-standard-error rule', crossValidation.oneStandardError),
      row('Chosen', chosen),
    ],
  });
  if (crossValidation.atGridEnd)
    writer.caution('The smallest deviance lies at the end of the penalties that were tried: a weaker penalty might do better.');
  const unproven = crossValidation.notConverged ?? [];
  if (unproven.length > 0)
    writer.caution(
      `At ${plural(unproven.length, 'penalty', 'penalties')} the fit of a fold did not reach its tolerance: the mean deviance there is not proven, and the rules may have chosen by it.`,
    );
  const folds = input.specification.fit.folds;
  if (folds !== null && folds.classing === 'once') {
    writer.caution(
      'Bins and WOE were made once, on all development rows, before cross-validation: its deviance is optimistic, and the penalty that it prefers may be too weak.',
    );
  }
}

function writeChoice(writer: Writer): void {
  const { penaltyChoice } = writer.input;
  writer.heading('Choice of the penalty');
  if (penaltyChoice === null) writer.notEvidenced('Choice of the penalty');
  else {
    writer.facts([
      ['Chosen by', `${penaltyChoice.by}, ${timeText(penaltyChoice.at)}`],
      ['Rule', penaltyChoice.rule],
      ['Reason', penaltyChoice.reason ?? ''],
    ]);
  }
}

function writeStability(writer: Writer): void {
  const { input } = writer;
  const { stability, result } = input;
  writer.heading('Stability over resamples');
  if (stability === null) {
    writer.notEvidenced('Stability over resamples');
    return;
  }
  const coefficients = new Map(result.characteristics.map((entry) => [entry.column, entry.coefficient]));
  const byColumn = new Map(stability.characteristics.map((entry) => [entry.column, entry]));
  const ordered = result.characteristics
    .map((entry) => byColumn.get(entry.column))
    .filter((entry) => entry !== undefined)
    .sort((first, second) => second.selected - first.selected);
  const shaky = ordered.filter(
    (entry) => (coefficients.get(entry.column) ?? 0) !== 0 && entry.sameSign !== null && entry.sameSign < 0.95,
  );
  writer.table(
    `Coefficients over ${whole(stability.resamples)} resamples`,
    stability.evidence,
    {
      columns: [
        { title: 'Characteristic', grow: 1 },
        { title: 'Coefficient', align: 'right' },
        { title: 'Selected', align: 'right' },
        { title: 'Same sign', align: 'right' },
        { title: `${percent(stability.level, 0)} interval`, align: 'right' },
      ],
      rows: ordered.map((entry) => {
        const coefficient = coefficients.get(entry.column) ?? null;
        return {
          cells: [
            writer.labelWithUnit(entry.column),
            coefficient === 0 ? '0' : fixed(coefficient, 4),
            percent(entry.selected, 0),
            percent(entry.sameSign, 0),
            entry.coefficient === null ? '–' : intervalText(entry.coefficient.lower, entry.coefficient.upper, 3),
          ],
          tone: coefficient === 0 ? ('quiet' as const) : undefined,
        };
      }),
    },
    shaky.length === 0
      ? 'Every coefficient kept has the same sign in at least 95 % of the resamples that keep it.'
      : `${shaky.map((entry) => writer.label(entry.column)).join(', ')}: the sign is the same in fewer than 95 % of the resamples that keep ${shaky.length === 1 ? 'it' : 'them'}.`,
  );
  writer.note(
    `Scheme: ${stability.scheme}${stability.seed === null ? '' : `, seed ${stability.seed}`}; percentile intervals. No p-values are given after selection. Below 95 % same sign is flagged (common practice).`,
  );
}
