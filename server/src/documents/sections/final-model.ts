import type { ResultCharacteristic } from '@tallystone/contracts/result/types';
import { reasonTextOf } from '@tallystone/contracts/scorecards/reason-text';
import { fixed, plural, significant, whole, woe } from '../number-texts';
import { linearScale } from '../charts/plot';
import type { Writer } from '../page/writer';
import { colour } from '../tokens';
import { judgementCaution } from './wording';

const isKept = (entry: ResultCharacteristic): boolean =>
  entry.coefficient === null ? entry.bins.some((bin) => (bin.coefficient ?? 0) !== 0) : entry.coefficient !== 0;

/** 10 Final model. */
export function writeFinalModel(writer: Writer): void {
  const { input } = writer;
  const { result, specification } = input;
  const { scaling } = specification;
  const kept = result.characteristics.filter(isKept);
  writer.beginSection('10', 'Final model');
  writer.text(
    `ln(good:bad) = ${fixed(result.intercept, 6)} plus the sum of coefficient times WOE; PD = 1/(1 + e^ln(good:bad)) ${writer.cite(input.resultEvidence)}. Higher WOE, higher log odds and a higher score all mean lower risk, so a WOE coefficient is expected to be positive.`,
  );
  const flipped = kept.filter((entry) => entry.coefficient !== null && entry.coefficient < 0 && entry.bins.length > 0);
  writer.table(
    'Coefficients of the characteristics kept',
    input.resultEvidence,
    {
      columns: [
        { title: 'Characteristic', grow: 1 },
        { title: 'Coefficient', align: 'right' },
        { title: 'IV', align: 'right' },
        { title: 'Smallest points', align: 'right' },
        { title: 'Largest points', align: 'right' },
        { title: 'Range', align: 'right' },
        { title: 'Penalty multiplier', align: 'right' },
      ],
      rows: kept.map((entry) => {
        const points = entry.bins.map((bin) => bin.pointsRounded);
        const stated = specification.characteristics.find((characteristic) => characteristic.column === entry.column);
        const [low, high] = [Math.min(...points), Math.max(...points)];
        return {
          cells: [
            writer.labelWithUnit(entry.column),
            entry.coefficient === null ? 'by bin' : fixed(entry.coefficient, 6),
            fixed(entry.informationValue, 3),
            points.length === 0 ? '–' : whole(low),
            points.length === 0 ? '–' : whole(high),
            points.length === 0 ? '–' : whole(high - low),
            stated === undefined ? '–' : stated.penaltyMultiplier === 0 ? 'always kept' : significant(stated.penaltyMultiplier),
          ],
        };
      }),
    },
    flipped.length === 0
      ? 'Every WOE coefficient has the expected sign.'
      : `${flipped.map((entry) => writer.label(entry.column)).join(', ')}: the coefficient is negative, against the expected sign; ${flipped.length === 1 ? 'it needs' : 'they need'} a reason.`,
  );

  writer.heading('Points');
  const factor = scaling.pointsToDouble / Math.LN2;
  const offset = scaling.baseScore - factor * Math.log(scaling.baseOdds);
  writer.text(
    `Score = ${fixed(offset, 4)} + ${fixed(factor, 4)} × ln(good:bad): ${fixed(scaling.baseScore, 0)} points at odds of ${significant(scaling.baseOdds)}:1, ${significant(scaling.pointsToDouble)} points to double the odds. ` +
      (scaling.intercept === 'spread' && result.kept > 0
        ? `The base points ${fixed(result.basePoints, 4)} are spread evenly over the ${plural(result.kept, 'characteristic')} kept.`
        : `Base points ${fixed(result.basePoints, 4)} are added once.`) +
      ' Each points value is rounded to the nearest integer, halves away from zero, then summed.',
  );
  const reasonTexts = specification.reasons.texts;
  const everyPoint = kept.flatMap((entry) => entry.bins.map((bin) => bin.pointsRounded));
  const reach = linearScale(Math.min(0, ...everyPoint), Math.max(1, ...everyPoint), 0, 1);
  writer.table('Points by attribute', input.resultEvidence, {
    columns: [
      { title: 'Characteristic', grow: 2 },
      { title: 'Attribute', grow: 3 },
      { title: 'WOE', align: 'right' },
      { title: 'Exact points', align: 'right' },
      { title: 'Points', align: 'right' },
    ],
    rows: kept.flatMap((entry) =>
      entry.bins.map((bin, index) => ({
        cells: [
          index === 0 ? writer.labelWithUnit(entry.column) : '',
          bin.label,
          woe(bin.woe),
          fixed(bin.points, 4),
          whole(bin.pointsRounded),
        ],
        under: index === 0 ? undefined : writer.labelWithUnit(entry.column),
      })),
    ),
    drawing: {
      title: '',
      width: 120,
      row: (index, box) => {
        const zero = box.x + reach(0) * box.width;
        const end = box.x + reach(everyPoint[index]) * box.width;
        const { doc } = writer.sheet;
        doc.rect(Math.min(zero, end), box.y + box.height / 2 - 3, Math.abs(end - zero), 6).fill(colour.container);
        doc.rect(end - 1, box.y + box.height / 2 - 4.5, 2, 9).fill(colour.primary);
      },
    },
  });
  const rounding = result.metrics.development;
  if (rounding !== null) {
    writer.text(
      `Rounding moves no development score by more than ${fixed(rounding.largestRounding, 2)} points; the AUC of the rounded score is ${fixed(rounding.aucRounded, 4)} against ${fixed(rounding.auc, 4)} ${writer.cite(input.resultEvidence)}.`,
    );
  }

  writer.heading('Reason codes');
  const { reasons } = specification;
  const baseline = {
    mean: 'the mean points of development',
    'cut-off': 'applicants at or just above the cut-off',
    largest: 'the largest points',
  }[reasons.baseline];
  writer.text(
    `For a declined applicant, the characteristics furthest below ${baseline}, largest unrounded loss first, ties in the order of the specification, only real losses, at most ${whole(reasons.most)}.`,
  );
  const without = kept.filter((entry) => reasonTextOf(reasonTexts, entry.column) === '');
  if (without.length > 0) writer.notEvidenced(`Reason text of ${without.map((entry) => writer.label(entry.column)).join(', ')}`);
  const withText = kept.filter((entry) => reasonTextOf(reasonTexts, entry.column) !== '');
  if (withText.length > 0) {
    writer.table('Reason texts', input.resultEvidence, {
      columns: [
        { title: 'Characteristic', grow: 1 },
        { title: 'Text', grow: 3 },
      ],
      rows: withText.map((entry) => ({ cells: [writer.label(entry.column), reasonTexts[entry.column]] })),
    });
  }
  writer.caution(judgementCaution);
  writer.authorTexts(10, ['Business sense of each characteristic', ...(flipped.length > 0 ? ['Sign exceptions'] : [])]);
}
