import { reasonTextOf } from '@tallystone/contracts/scorecards/reason-text';
import type { ScoreBand, Scorecard, ScorecardSettings } from '@tallystone/contracts/scorecards/schema';
import { scaleToPoints } from '@tallystone/numeric/scaling/points';
import { MINUS, fixed, metric, plural, points, share } from '../../../ui/numbers';

/** A scorecard whose rows are there: what is counted on them is not null. */
export type CountedScorecard = Scorecard & { readonly distribution: Distribution; readonly rounding: NonNullable<Scorecard['rounding']> };
type Distribution = NonNullable<Scorecard['distribution']>;

export const isCounted = (scorecard: Scorecard): scorecard is CountedScorecard => scorecard.distribution !== null && scorecard.rounding !== null;

/** One attribute as the points table lists it. */
export interface Attribute {
  readonly label: string;
  /** Of development. */
  readonly share: number;
  readonly badRate: number | null;
  readonly woe: number;
  readonly points: number;
}

/** One characteristic with its attributes in the order of its bins. */
export interface PointsBlock {
  readonly column: string;
  readonly label: string;
  readonly coefficient: number;
  readonly informationValue: number;
  readonly againstWoe: boolean;
  readonly attributes: readonly Attribute[];
  readonly neutral: number;
  /** Largest less smallest points: what the characteristic can decide. */
  readonly range: number;
}

/**
 * Points under a scaling: the library's arithmetic on the coefficients and WOE that came with the scorecard, so that a scale that is being
 * typed shows what it would do before it is saved.
 */
export function pointsUnder(scorecard: Scorecard, scaling: ScorecardSettings['scaling']): PointsBlock[] {
  const scaled = scaleToPoints(scaling, {
    intercept: scorecard.intercept,
    terms: scorecard.characteristics.map(({ coefficient, bins }) => ({ coefficient, woe: bins.map((bin) => bin.woe) })),
  });
  return scorecard.characteristics.map(({ column, label, coefficient, informationValue, bins }, k) => {
    const rows = bins.reduce((sum, bin) => sum + bin.rows, 0);
    const own = scaled.pointsRounded[k];
    return {
      column,
      label,
      coefficient,
      informationValue,
      againstWoe: coefficient < 0,
      attributes: bins.map((bin, i) => ({
        label: bin.label,
        share: rows === 0 ? 0 : bin.rows / rows,
        badRate: bin.goods + bin.bads === 0 ? null : bin.bads / (bin.goods + bin.bads),
        woe: bin.woe,
        points: own[i],
      })),
      neutral: scaled.neutral[k],
      range: own.length === 0 ? 0 : Math.max(...own) - Math.min(...own),
    };
  });
}

/** What a scale says of itself, in the words of the trade: points per doubling, at even odds, per unit of log odds. */
export function scaleReadings(scaling: ScorecardSettings['scaling']): { readonly label: string; readonly text: string }[] {
  const factor = scaling.pointsToDouble / Math.LN2;
  return [
    { label: 'Points per doubling', text: fixed(scaling.pointsToDouble, 1) },
    { label: 'Points at even odds', text: fixed(scaling.baseScore - factor * Math.log(scaling.baseOdds), 1) },
    { label: 'Points per unit of log odds', text: fixed(factor, 2) },
  ];
}

/** Columns that an applicant would be told nothing about. */
export function withoutReason(scorecard: Scorecard): string[] {
  const { texts } = scorecard.settings.reasons;
  return scorecard.characteristics.filter(({ column }) => reasonTextOf(texts, column) === '').map(({ label }) => label);
}

/**
 * The sentence of the page, the first rule that holds: nothing is kept; a coefficient runs against WOE; else the range of scores, where the
 * rows that they were counted on are there, and the characteristic that can decide most.
 */
export function scorecardFinding(scorecard: Scorecard): string {
  const { characteristics } = scorecard;
  if (characteristics.length === 0) return 'No characteristic is kept at this penalty: every applicant gets the same score.';
  const against = characteristics.filter(({ coefficient }) => coefficient < 0).map(({ label }) => label);
  if (against.length > 0) {
    return `${list(against)} ${against.length === 1 ? 'runs' : 'run'} against WOE: there, a lower risk costs points.`;
  }
  const [most] = [...pointsUnder(scorecard, scorecard.settings.scaling)].sort((a, b) => b.range - a.range);
  const kept = plural(characteristics.length, 'characteristic');
  const decides = `${most.label} can decide most, with ${plural(most.range, 'point')} between its attributes.`;
  if (scorecard.smallestScore === null || scorecard.largestScore === null) return `${kept} ${characteristics.length === 1 ? 'makes' : 'make'} the score; ${decides}`;
  return `${kept} ${characteristics.length === 1 ? 'makes' : 'make'} scores from ${points(scorecard.smallestScore)} to ${points(scorecard.largestScore)}; ${decides}`;
}

export type ScorecardDecision = 'nothing-kept' | 'scale' | 'reasons' | 'cut-off' | 'freeze';

/** What to decide next, the first that holds. */
export function scorecardDecision(scorecard: Scorecard): ScorecardDecision {
  if (scorecard.characteristics.length === 0) return 'nothing-kept';
  if (scorecard.revision === 0) return 'scale';
  if (withoutReason(scorecard).length > 0) return 'reasons';
  return scorecard.settings.cutOff === null ? 'cut-off' : 'freeze';
}

export function decisionWords(scorecard: Scorecard): string {
  switch (scorecardDecision(scorecard)) {
    case 'nothing-kept':
      return 'Choose a smaller penalty on the path of the fit, so that something is kept.';
    case 'scale':
      return 'The scale shown is the usual one and has not been stated yet. Look at it, change it or take it, and save.';
    case 'reasons': {
      const missing = withoutReason(scorecard);
      return `${list(missing.slice(0, 4))}${missing.length > 4 ? ` and ${missing.length - 4} more` : ''}: say what an applicant is told who loses points there. A submission needs it.`;
    }
    case 'cut-off':
      return 'No cut-off is stated. State one, or freeze without: the version then makes scores and decides nothing.';
    case 'freeze':
      return 'Scale, bands, reasons and cut-off are stated. Freezing makes them a version that nobody can change.';
  }
}

/** What freezing does, and what a submission will miss that only the scorecard can give. */
export function freezeWords(scorecard: Scorecard): string {
  const untold = withoutReason(scorecard).length;
  const gap =
    untold === 0
      ? ''
      : ` ${plural(untold, 'characteristic')} ${untold === 1 ? 'has' : 'have'} no reason text: a submission needs them all, and they cannot be added to a version.`;
  return `Data, bins, fit, points and settings become a version with a fingerprint. Nobody can change it afterwards; a change is a new version.${gap}`;
}

export interface AtCutOff {
  readonly approved: number;
  /** Bad rate among the approved; null when nobody is approved. */
  readonly badRate: number | null;
  /** False where the cut-off falls inside a step of the distribution: then the nearest step above counts. */
  readonly exact: boolean;
}

/** Approval rate and bad rate at a cut-off, of development and hold-out rows with a known outcome. */
export function atCutOff(distribution: Distribution, cutOff: number): AtCutOff {
  const { from, step, goods, bads } = distribution;
  const place = (cutOff - from) / step;
  const first = Math.max(0, Math.ceil(place - 1e-9));
  const sum = (values: readonly number[], start = 0): number => values.slice(start).reduce((total, value) => total + value, 0);
  const all = sum(goods) + sum(bads);
  const approved = sum(goods, first) + sum(bads, first);
  return {
    approved: all === 0 ? 0 : approved / all,
    badRate: approved === 0 ? null : sum(bads, first) / approved,
    exact: place <= 0 || Math.abs(place - Math.round(place)) < 1e-9,
  };
}

/** "cut-off 470: approves 71.2 %, bad rate 12.3 %". */
export function cutOffLabel(distribution: Distribution, cutOff: number): string {
  const { approved, badRate, exact } = atCutOff(distribution, cutOff);
  const about = exact ? '' : 'about ';
  return `cut-off ${points(cutOff)}: approves ${about}${share(approved)}${badRate === null ? '' : `, bad rate ${about}${share(badRate)}`}`;
}

/** "below 452", "452 to 471", "471 and above": bands are closed below; scores are whole. */
export function bandLabel({ from, to }: Pick<ScoreBand, 'from' | 'to'>): string {
  if (from === null) return to === null ? 'all scores' : `below ${points(to)}`;
  if (to === null) return `${points(from)} and above`;
  const last = Math.ceil(to) - 1;
  return last === from ? points(from) : `${points(from)} to ${points(last)}`;
}

export const badRateOf = (part: { readonly goods: number; readonly bads: number } | null): number | null =>
  part === null || part.goods + part.bads === 0 ? null : part.bads / (part.goods + part.bads);

/**
 * What the bands say: whether the bad rate falls from band to band in development, and where it does not. Bands without an outcome are
 * passed over.
 */
export function bandsFinding(bands: readonly ScoreBand[]): string {
  const rates = bands.flatMap((band) => {
    const rate = badRateOf(band.development);
    return rate === null ? [] : [{ band, rate }];
  });
  if (rates.length < 2) return `${plural(bands.length, 'band')}.`;
  const back = rates.filter(({ rate }, i) => i > 0 && rate > rates[i - 1].rate).map(({ band }) => bandLabel(band));
  const words = `Bad rate from ${share(rates[0].rate)} to ${share(rates[rates.length - 1].rate)} over ${plural(bands.length, 'band')}`;
  return back.length === 0 ? `${words}, falling from each to the next.` : `${words}; it does not fall at ${list(back)}.`;
}

/** What rounding to whole points costs. */
export function roundingWords({ rounding }: Pick<CountedScorecard, 'rounding'>): string {
  const { largest, auc, aucRounded, decisionsChanged } = rounding;
  const change = aucRounded - auc;
  const moved = Math.abs(change) < 0.0005 ? `leaves AUC at ${metric(auc)}` : `moves AUC by ${change < 0 ? MINUS : '+'}${fixed(Math.abs(change), 4)}`;
  const changed = decisionsChanged === null ? '' : `, and changes ${share(decisionsChanged, 2)} of decisions at the cut-off`;
  return `Whole points move a score by ${fixed(largest, 1)} at most; rounding ${moved}${changed}.`;
}

/** Edges typed as "440 460 480" or "440, 460": rising numbers, or null where they are not. */
export function readEdges(text: string): number[] | null {
  const parts = text
    .replaceAll(MINUS, '-')
    .split(/[\s,;]+/)
    .filter(Boolean)
    .map(Number);
  const rising = parts.every((edge, i) => Number.isFinite(edge) && (i === 0 || edge > parts[i - 1]));
  return parts.length > 0 && parts.length < 50 && rising ? parts : null;
}

/** "a", "a and b", "a, b and c". */
export function list(names: readonly string[]): string {
  return names.length < 2 ? (names[0] ?? '') : `${names.slice(0, -1).join(', ')} and ${names[names.length - 1]}`;
}
