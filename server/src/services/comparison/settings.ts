import type { DifferingSetting } from '@tallystone/contracts/comparison/schema';
import { inferenceNames } from '@tallystone/contracts/fits/inference';
import { outcomeColumns, outcomeWords } from '@tallystone/contracts/specification/outcome';
import type { Specification } from '@tallystone/contracts/specification/types';
import type { z } from 'zod';

type Setting = readonly [string, (specification: Specification) => string];

const penalty = ({ fit }: Specification): string => {
  const mixing = Array.isArray(fit.mixing) ? fit.mixing.join(', ') : String(fit.mixing);
  return mixing === '1' ? 'lasso (mixing 1)' : mixing === '0' ? 'ridge (mixing 0)' : `elastic net (mixing ${mixing})`;
};

const lambda = ({ fit }: Specification): string => {
  if ('value' in fit.lambda) return String(fit.lambda.value);
  if ('grid' in fit.lambda) return `${fit.lambda.grid.length} stated`;
  const { count, smallestRatio, earlyStop } = fit.lambda;
  return `${count} down to ${smallestRatio} of the largest${earlyStop ? '' : ', no early stop'}`;
};

const folds = ({ fit }: Specification): string => {
  if (fit.folds === null) return 'none';
  if ('column' in fit.folds) return `by column ${fit.folds.column}`;
  return `${fit.folds.count}, seed ${fit.folds.seed}${fit.folds.groups === null ? '' : `, grouped by ${fit.folds.groups}`}`;
};

const declined = (specification: Specification): string => {
  if (specification.declined === null) return 'none';
  const { method, bands, uplift } = specification.declined;
  if (method === 'none') return 'take no part';
  return method === 'parcelling' ? `${inferenceNames[method]}, ${bands} bands, uplift ${uplift}` : inferenceNames[method];
};

const columnsWhere = (specification: Specification, holds: (entry: Specification['characteristics'][number]) => boolean): string =>
  specification.characteristics.filter(holds).map(({ column }) => column).join(', ') || 'none';

const settings: readonly Setting[] = [
  ['Data', ({ data }) => (data.sha256 === null ? 'any file' : `${data.sha256.slice(0, 12)}…`)],
  [
    'Outcome',
    ({ outcome }) => {
      const { good, bad } = outcomeWords(outcome);
      return `${outcomeColumns(outcome).join(', ')}: good ${good}; bad ${bad}`;
    },
  ],
  ['Exclusions', ({ exclusions }) => exclusions.map(({ reason }) => reason).join('; ') || 'none'],
  ['Weight', ({ weight }) => weight?.column ?? 'none'],
  ['Declined applicants', declined],
  ['Bad rate of the population', ({ priorCorrection }) => (priorCorrection === null ? 'as in the sample' : `${100 * priorCorrection.populationBadRate} %`)],
  ['Penalty', penalty],
  ['Penalties', lambda],
  ['Standardised', ({ fit }) => (fit.standardize ? 'yes' : 'no')],
  ['Folds', folds],
  ['Classing inside the folds', ({ fit }) => fit.folds?.classing ?? 'none'],
  ['Smoothing of WOE', ({ woe }) => `${woe.smoothing}, ${woe.when}`],
  ['Characteristics', ({ characteristics }) => String(characteristics.length)],
  ['Always kept', (specification) => columnsWhere(specification, (entry) => entry.penaltyMultiplier === 0)],
  ['Sign constrained', (specification) => columnsWhere(specification, (entry) => entry.lower === 0 || entry.upper === 0)],
];

/**
 * The settings that are not the same in every fit, as texts in the order of the fits.
 *
 * @example differingSettings([lasso, ridge]) // [{ setting: 'Penalty', values: ['lasso (mixing 1)', 'ridge (mixing 0)'] }]
 */
export function differingSettings(specifications: readonly Specification[]): z.infer<typeof DifferingSetting>[] {
  return settings
    .map(([setting, text]) => ({ setting, values: specifications.map(text) }))
    .filter(({ values }) => new Set(values).size > 1);
}
