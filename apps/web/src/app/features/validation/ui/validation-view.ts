import type { HalvesRow, PartitionAuc, Replication, Stability, StabilityRow, ValidationWork } from '@tallystone/contracts/validation/schema';
import { count, fixed, metric, pValue, plural, points, share, significant } from '../../../ui/numbers';

/** Below this share of resamples with the sign of the version a coefficient is flagged (common practice). */
export const sameSignFlag = 0.95;

const methodNames = { 'same code': 'same code in a new process', independent: 'an independent solver' } as const;
export const methodName = (method: Replication['method']): string => methodNames[method];

/** Whole numbers whole; others to seven decimals, so that a difference at the tolerance shows. */
export const halfNumber = (value: number | null): string => (value !== null && Number.isInteger(value) ? fixed(value, 0) : fixed(value, 7));

/** "equal", "same to 4e−13", "differs by 2.1e−5", "only one half has it". */
export function meetWords(row: HalvesRow): string {
  if (row.difference === null) return row.meets ? 'absent in both' : 'only one half has it';
  if (!row.meets) return `differs by ${significant(row.difference, 2)}`;
  return row.difference === 0 ? 'equal' : `same to ${significant(row.difference, 1)}`;
}

export type HalvesShown = 'coefficients' | 'all';

/** Rows of the figure: intercept, penalty and coefficients, and whatever does not meet; or all of them, points included. */
export function shownRows(rows: readonly HalvesRow[], shown: HalvesShown): HalvesRow[] {
  return rows.filter((row) => shown === 'all' || !row.meets || !row.place.endsWith('.pointsRounded'));
}

/** The sentence of the two halves. */
export function halvesFinding(replication: Replication): string {
  const { matches, compared, differing, largestDifference, scoresCompared, scoresEqual } = replication;
  const scores = scoresEqual ? `${count(scoresCompared)} scores are equal` : `of ${count(scoresCompared)} scores some differ`;
  if (matches) return `All ${count(compared)} numbers ${largestDifference === 0 ? 'are equal' : `meet, to ${significant(largestDifference, 1)} at most`}, and ${scores}.`;
  return `${plural(differing, 'number')} of ${count(compared)} ${differing === 1 ? 'does' : 'do'} not meet; the largest difference is ${significant(largestDifference, 2)}, and ${scores}.`;
}

/** "0.781 (0.752 to 0.810)". */
export const aucWords = ({ auc, lower, upper }: PartitionAuc): string =>
  lower === null || upper === null ? metric(auc) : `${metric(auc)} (${metric(lower)} to ${metric(upper)})`;

/**
 * The sentence over the performance: whether hold-out stays inside the uncertainty of development. Intervals are DeLong's, 95 %.
 */
export function performanceFinding(performance: readonly PartitionAuc[]): string | null {
  const development = performance.find(({ partition }) => partition === 'development');
  const holdOut = performance.find(({ partition }) => partition === 'holdOut');
  if (!development) return null;
  if (!holdOut) return `Development AUC ${aucWords(development)}; there is no hold-out to hold it against.`;
  const fall = development.auc - holdOut.auc;
  if (fall <= 0) return `Hold-out AUC ${aucWords(holdOut)} is no lower than development’s ${metric(development.auc)}.`;
  const inside = holdOut.upper !== null && holdOut.upper >= development.auc;
  return `Hold-out AUC ${aucWords(holdOut)} is ${fixed(fall, 3)} below development’s, ${inside ? 'within' : 'beyond'} its 95 % interval.`;
}

/** Characteristics whose sign is not sure: of the resamples that kept them, fewer than 95 % have the sign of the version. */
export const unsure = (row: StabilityRow): boolean => row.sameSign !== null && row.sameSign < sameSignFlag;

/** The sentence over the stability, the first that holds: signs that flip; the one kept least often; all kept always. */
export function stabilityFinding({ rows, resamples }: Pick<Stability, 'rows' | 'resamples'>): string {
  const kept = rows.filter(({ coefficient }) => coefficient !== 0);
  const flips = kept.filter(unsure);
  if (flips.length > 0) {
    const names = flips.slice(0, 3).map(({ label, sameSign }) => `${label} (${share(sameSign, 0)})`);
    return `${names.join(', ')}${flips.length > 3 ? ` and ${flips.length - 3} more` : ''}: fewer than ${share(sameSignFlag, 0)} of resamples agree in sign.`;
  }
  if (kept.length === 0) return `Nothing is kept; ${count(resamples)} resamples were drawn.`;
  const [least] = [...kept].sort((a, b) => a.selected - b.selected);
  if (least.selected < 1) return `Every sign holds over ${count(resamples)} resamples; ${least.label} is kept least often, in ${share(least.selected, 0)}.`;
  return `Every characteristic is kept, with its sign, in all ${count(resamples)} resamples.`;
}

/**
 * The sentence of the page, the first rule that holds: nothing replicated; the latest replication of either method does not match; else what
 * met, and the hold-out AUC.
 */
export function validationFinding(work: ValidationWork): string {
  if (work.replications.length === 0) return 'Not replicated yet: the halves have not been held together.';
  const latest = latestByMethod(work.replications);
  const off = latest.filter(({ matches }) => !matches);
  if (off.length > 0) {
    return `${plural(off[0].differing, 'number')} ${off[0].differing === 1 ? 'does' : 'do'} not meet when replicated by ${methodName(off[0].method)}, so the version cannot rest on it.`;
  }
  const by = latest.map(({ method }) => methodName(method)).join(' and by ');
  const holdOut = work.performance.find(({ partition }) => partition === 'holdOut');
  return `Replicated by ${by}: every number meets.${holdOut ? ` Hold-out AUC ${aucWords(holdOut)}.` : ''}`;
}

/** The newest replication of each method; same code first. */
export function latestByMethod(replications: readonly Replication[]): Replication[] {
  return (['same code', 'independent'] as const).flatMap((method) => {
    const [latest] = replications.filter((entry) => entry.method === method).sort((a, b) => b.evidenceNumber - a.evidenceNumber);
    return latest ? [latest] : [];
  });
}

/** What a validator does next; null where nothing of this page is missing. */
export function nextTest(work: ValidationWork): string | null {
  if (work.replications.length === 0) return 'Replicate from the stored raw file before anything else: a conclusion needs a replication by someone who did not develop the version.';
  if (latestByMethod(work.replications).some(({ matches }) => !matches)) return 'Find out why the halves do not meet: same file, same specification, same code version? Replicate again after that.';
  if (!work.replications.some(({ method }) => method === 'independent')) return 'Replicate with the independent solver too: it shares no code with the engine.';
  if (work.stability.length === 0) return 'Study the stability: how coefficients and points behave over resamples.';
  return null;
}

/** "7.10 on 8, p = 0.53": the statistic on its degrees of freedom. */
export function hosmerLemeshowWords({ hosmerLemeshow: test }: PartitionAuc): string {
  if (test === null || test.statistic === null) return 'not computed';
  return `${fixed(test.statistic, 2)} on ${test.degreesOfFreedom}, ${pValue(test.pValue)}`;
}

/** "+12 (8 to 17)": points of a bin with their interval over resamples. */
export const pointsWords = ({ points: value, lower, upper }: StabilityRow['bins'][number]): string =>
  lower === null || upper === null ? points(value) : `${points(value)} (${points(lower)} to ${points(upper)})`;
