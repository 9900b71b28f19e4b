import { createHash } from 'node:crypto';
import type { FitSettings as FitSettingsOfFit } from '@tallystone/contracts/fits/schema';
import type { SampleDefinitionContent } from '@tallystone/contracts/samples/definition';
import type {
  BinnedCharacteristic,
  Bands,
  FitSettings,
  Reasons,
  Scaling,
  Specification,
} from '@tallystone/contracts/specification/types';
import canonicalize from 'canonicalize';

/** Shown and used until a scorecard states its own. Defaults of governance.md: 500 points at 16:1, 25 to double the odds. */
export const defaultScaling: Scaling = { pointsToDouble: 25, baseScore: 500, baseOdds: 16, intercept: 'spread', rounding: 'nearest' };
export const defaultBands: Bands = { quantiles: 10 };
export const defaultReasons: Reasons = { baseline: 'mean', most: 4, texts: {} };

export interface SpecificationParts {
  readonly title: string;
  readonly head: SampleDefinitionContent;
  /** Entries of the binning that are included, in its order. */
  readonly characteristics: readonly BinnedCharacteristic[];
  readonly settings: FitSettingsOfFit;
  readonly scaling?: Scaling;
  readonly bands?: Bands;
  readonly reasons?: Reasons;
  readonly cutOff?: number | null;
}

/**
 * Puts a specification together from what three screens decided: the head from the sample's definition, characteristics from the binning,
 * the rest from the settings of the fit and, later, of the scorecard. What is left out by hand is not in it; "always kept" is multiplier 0;
 * a sign constraint is lower = 0, as coefficients of WOE are positive in the ln(good:bad) orientation.
 */
export function buildSpecification(parts: SpecificationParts): Specification {
  const { head, settings } = parts;
  const treatments = new Map(settings.characteristics.map((entry) => [entry.column, entry]));
  const characteristics = parts.characteristics
    .filter(({ column }) => treatments.get(column)?.treatment !== 'left out')
    .map((entry) => {
      const treatment = treatments.get(entry.column);
      return {
        ...entry,
        penaltyMultiplier: treatment?.treatment === 'always kept' ? 0 : (treatment?.penaltyMultiplier ?? 1),
        lower: treatment?.signConstraint ? 0 : null,
        upper: null,
      };
    });
  return {
    format: 'tallystone-specification',
    formatVersion: 1,
    title: parts.title,
    data: head.data,
    exclusions: head.exclusions,
    outcome: head.outcome,
    declined: declinedOf(head, settings),
    weight: head.weight,
    priorCorrection: settings.priorCorrection && { populationBadRate: settings.priorCorrection.populationBadRate },
    partition: head.partition,
    characteristics,
    woe: settings.woe,
    fit: fitOf(settings, head),
    recalibration: null,
    scaling: parts.scaling ?? defaultScaling,
    bands: parts.bands ?? defaultBands,
    psi: { smoothing: 0 },
    reasons: parts.reasons ?? defaultReasons,
    cutOff: parts.cutOff ?? null,
  };
}

/** Who was declined is for the sample to say, how they are treated for the fit. */
function declinedOf(head: SampleDefinitionContent, { declined }: FitSettingsOfFit): Specification['declined'] {
  if (head.declined === null) return null;
  return declined.method === 'none' ? head.declined : { ...head.declined, method: declined.method, bands: declined.bands, uplift: declined.uplift };
}

/** Rows of one group key stay in one fold. */
function fitOf(settings: FitSettingsOfFit, { columns, groupsBy }: SampleDefinitionContent): FitSettings {
  const groups = columns.find(({ role }) => role === 'group key')?.column ?? null;
  const { count, seed, classing } = settings.folds;
  return {
    mixing: settings.mixing,
    standardize: settings.standardize,
    lambda: settings.lambda,
    choose: 'one-standard-error',
    folds: { count, seed, groups, ...(groups !== null && groupsBy && { groupsBy }), classing },
    refit: null,
  };
}

/**
 * The specification of a version: the fit's own, with the penalty that was chosen. By a rule, the same path and rule are replayed, so that the
 * choice itself is replicated; by hand, the path down to the chosen penalty, which is taken.
 */
export function withChoice(
  specification: Specification,
  choice: { readonly rule: 'minimum' | 'one-standard-error' | 'by hand'; readonly index: number },
  lambdas: readonly number[],
): Specification {
  const fit: FitSettings =
    choice.rule === 'by hand'
      ? { ...specification.fit, lambda: { grid: lambdas.slice(0, choice.index + 1) }, choose: 'value' }
      : { ...specification.fit, choose: choice.rule };
  return { ...specification, fit };
}

/** RFC 8785 canonical JSON of a specification, and the SHA-256 that stands for it. */
export function canonical(value: unknown): { readonly text: string; readonly sha256: string } {
  const text = canonicalize(value);
  if (text === undefined) throw new Error('Nothing to make canonical');
  return { text, sha256: createHash('sha256').update(text).digest('hex') };
}
