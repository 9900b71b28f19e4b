import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import { reasonTextOf } from '@tallystone/contracts/scorecards/reason-text';
import type { Applicant, ScoredApplicant } from '@tallystone/contracts/scorecards/schema';
import { type Points, probabilityOfBad, roundAwayFromZero } from '@tallystone/numeric';
import type { Sequelize } from 'sequelize';
import { invalid } from '../../problems/problem';
import { codeCharacteristics } from '../../replay/coding';
import { ReplayError } from '../../replay/problems';
import { sourceOf } from '../../replay/source';
import { DEVELOPMENT, NO_BIN } from '../../replay/types';
import type { FoundFit } from '../fits/find-fit';
import { type LoadedScorecard, loadScorecard } from './load-scorecard';
import { buildOnRows, pointsOfScorecard } from './read-scorecard';

export const applicantCaution =
  'An aid to judgement, not a decision. The law that applies to the lender governs (credit, equal treatment, data protection, automated decisions), and qualified staff decide. Reasons given to an applicant must be the factors actually scored.';

/**
 * Scores one applicant; nothing of it is kept. Fields are texts as they would stand in a file, read as the sample is read; one that is left
 * out or empty is missing.
 *
 * Reasons: the characteristics furthest below the stated baseline, largest unrounded loss first, ties in the order of the specification,
 * only real losses, at most the stated number (governance.md of the design; common practice).
 *
 * @throws Problem 422 with every field that cannot be read, 409 while no penalty is chosen, or where reasons are counted from the applicants at the cut-off
 *   and their rows were erased
 */
export async function scoreApplicant(sequelize: Sequelize, fit: FoundFit, applicant: Applicant): Promise<ScoredApplicant> {
  const loaded = await loadScorecard(sequelize, fit);
  const points = pointsOfScorecard(loaded);
  const codes = codesOf(loaded, applicant);
  const unroundedBy = codes.map((code, k) => (code === NO_BIN ? points.neutral[k] : points.points[k][code]));
  const roundedBy = codes.map((code, k) => (code === NO_BIN ? roundAwayFromZero(points.neutral[k]) : points.pointsRounded[k][code]));
  const eta = loaded.kept.reduce((sum, { coefficient, bins }, k) => sum + (codes[k] === NO_BIN ? 0 : coefficient * bins[codes[k]].woe), loaded.intercept);
  const score = roundedBy.reduce((sum, value) => sum + value, points.basePointsRounded);
  const { cutOff, reasons } = loaded.settings;
  const baseline = await baselineOf(sequelize, fit, loaded, points);
  const losses = baseline.map((value, k) => ({ k, loss: value - unroundedBy[k] })).filter(({ loss }) => loss > 0);
  losses.sort((a, b) => b.loss - a.loss || a.k - b.k);
  return {
    score,
    unrounded: points.offset + points.factor * eta,
    probabilityOfBad: probabilityOfBad(eta),
    decision: cutOff === null ? null : score >= cutOff ? 'approve' : 'decline',
    points: loaded.kept.map(({ definition, label, bins }, k) => ({
      column: definition.column,
      label,
      bin: codes[k] === NO_BIN ? 'not seen in development: neutral' : bins[codes[k]].label,
      woe: codes[k] === NO_BIN ? 0 : bins[codes[k]].woe,
      points: unroundedBy[k],
      pointsRounded: roundedBy[k],
    })),
    reasons: losses.slice(0, reasons.most).map(({ k, loss }) => {
      const { definition, label } = loaded.kept[k];
      return { column: definition.column, text: reasonTextOf(reasons.texts, definition.column) || label, loss };
    }),
    caution: applicantCaution,
  };
}

function codesOf(loaded: LoadedScorecard, { fields }: Applicant): number[] {
  const known = new Set(loaded.kept.map(({ definition }) => definition.column));
  const strangers = Object.keys(fields).filter((column) => !known.has(column));
  const problems = strangers.map((column) => ({ code: 'unknown-column', message: `"${column}" is not scored by this scorecard.`, where: { field: column } }));
  const texts = Object.fromEntries([...known].map((column) => [column, [Object.hasOwn(fields, column) ? fields[column].trim() : '']]));
  try {
    const one = { rows: 1, partition: Uint8Array.of(DEVELOPMENT) };
    const coded = codeCharacteristics(loaded.scoring, loaded.kept.length === 0 ? { rows: 1, column: () => undefined } : sourceOf(texts), one);
    if (problems.length > 0) throw invalid(problems);
    return coded.characteristics.map(({ codes }) => codes?.[0] ?? NO_BIN);
  } catch (error) {
    if (!(error instanceof ReplayError)) throw error;
    throw invalid([
      ...problems,
      ...error.problems.map(
        ({ code, message, where }): ProblemItem => ({ code, message, where: typeof where.column === 'string' ? { field: where.column } : {} }),
      ),
    ]);
  }
}

/** Points of each characteristic that losses are counted from. */
async function baselineOf(sequelize: Sequelize, fit: FoundFit, loaded: LoadedScorecard, points: Points): Promise<number[]> {
  const { reasons, cutOff } = loaded.settings;
  if (reasons.baseline === 'largest') return points.points.map((own) => Math.max(...own));
  if (reasons.baseline === 'cut-off' && cutOff !== null) {
    const { meanPointsAtCutOff } = await buildOnRows(sequelize, fit, loaded);
    // Nobody of development scores there: the average of all applicants is the next best baseline.
    if (meanPointsAtCutOff) return [...meanPointsAtCutOff];
  }
  return loaded.kept.map(({ bins }, k) => {
    const rows = bins.reduce((sum, bin) => sum + bin.rows, 0);
    return bins.reduce((sum, bin, i) => sum + bin.rows * points.points[k][i], 0) / rows;
  });
}
