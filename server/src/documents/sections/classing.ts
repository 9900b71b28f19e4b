import type { Characteristic } from '@tallystone/contracts/specification/types';
import type { ResultCharacteristic } from '@tallystone/contracts/result/types';
import { Ladder, logOdds } from '../charts/log-odds-ladder';
import { notMonotone } from '../../replay/not-monotone';
import type { ClassedCharacteristic, DocumentInput } from '../input';
import { counted, fixed, percent, plural, rate, significant, timeText, whole, woe } from '../number-texts';
import type { Writer } from '../page/writer';
import { isCovered } from './wording';

const isKept = (characteristic: ResultCharacteristic): boolean =>
  characteristic.coefficient === null
    ? characteristic.bins.some((bin) => (bin.coefficient ?? 0) !== 0)
    : characteristic.coefficient !== 0;

/** Kept first, then by information value. */
export function inOrder(characteristics: readonly ResultCharacteristic[]): ResultCharacteristic[] {
  return [...characteristics].sort(
    (first, second) =>
      Number(isKept(second)) - Number(isKept(first)) || (second.informationValue ?? 0) - (first.informationValue ?? 0),
  );
}

/** 8 Classing. */
export function writeClassing(writer: Writer): void {
  const { input } = writer;
  const { result, specification } = input;
  writer.beginSection('8', 'Classing');
  const smoothing = specification.woe;
  writer.text(
    'Weight of evidence (WOE) is ln(share of goods / share of bads) on development rows; information value (IV) is the sum over bins of (share of goods less share of bads) times WOE. Higher WOE means lower risk. ' +
      (smoothing.when === 'never'
        ? 'No smoothing is applied.'
        : `${significant(smoothing.smoothing)} is added to goods and bads of each bin ${smoothing.when === 'always' ? 'throughout' : 'of a characteristic with an empty cell'}.`),
  );
  const characteristics = inOrder(result.characteristics);
  const stated = new Map(specification.characteristics.map((entry) => [entry.column, entry]));
  const classed = new Map(input.classing?.characteristics.map((entry) => [entry.column, entry]));
  writer.table(
    'Characteristics in the classing',
    input.resultEvidence,
    {
      columns: [
        { title: 'Characteristic', grow: 2 },
        { title: 'Bins', align: 'right' },
        { title: 'IV', align: 'right' },
        { title: 'CSI hold-out', align: 'right' },
        { title: 'CSI out-of-time', align: 'right' },
        { title: 'Trend', grow: 1 },
        { title: 'Classed' },
        { title: 'In the model' },
      ],
      rows: characteristics.map((entry) => ({
        cells: [
          writer.labelWithUnit(entry.column),
          whole(entry.bins.length),
          fixed(entry.informationValue, 3),
          fixed(entry.csi.holdOut, 3),
          isCovered(input, 'outOfTime') ? 'covered' : fixed(entry.csi.outOfTime, 3),
          classed.get(entry.column)?.trend ?? '–',
          madeHow(stated.get(entry.column), classed.get(entry.column)),
          isKept(entry) ? 'kept' : 'not kept',
        ],
        tone: isKept(entry) ? undefined : ('quiet' as const),
      })),
    },
    `${plural(result.kept, 'characteristic')} of ${whole(characteristics.length)} ${result.kept === 1 ? 'is' : 'are'} in the model; those kept come first, then by information value.`,
  );
  writer.note(
    'Usual reading of IV: under 0.02 none, to 0.1 weak, to 0.3 medium, above strong, above 0.5 to be checked for leakage (Siddiqi 2006, from memory). CSI below 0.10 small, to 0.25 moderate, above large (common practice).',
  );

  writer.heading('Bins of each characteristic');
  writer.note(
    'Beside each table, log odds good:bad by bin: bar and band development with 95 % interval, circle hold-out, diamond out-of-time. Bins with no good or no bad have no mark.',
  );
  if (input.classing === null) writer.notEvidenced('Bins on hold-out and out-of-time rows, and the record of edits');
  for (const entry of characteristics) {
    if (entry.bins.length > 0) writeBins(writer, entry, classed.get(entry.column) ?? null);
  }
  writer.authorTexts(8, notMonotone(specification, result).length > 0 ? ['Trends that are not monotone'] : []);
}

function madeHow(characteristic: Characteristic | undefined, classed: ClassedCharacteristic | undefined): string {
  if (characteristic === undefined || characteristic.coding === 'linear') return characteristic === undefined ? '–' : 'as it is';
  const made = characteristic.classing.made;
  if (made === 'by hand') return 'by hand';
  return classed && classed.edits.length > 0 ? `automatic, ${plural(classed.edits.length, 'edit')}` : 'automatic';
}

function writeBins(writer: Writer, entry: ResultCharacteristic, classed: ClassedCharacteristic | null): void {
  const { sheet, input } = writer;
  const rows = entry.bins.reduce((sum, bin) => sum + bin.rows, 0);
  const holdOut = classed?.holdOut ?? null;
  const outOfTime = isCovered(input, 'outOfTime') ? null : (classed?.outOfTime ?? null);
  const later = (counts: { goods: number; bads: number }[] | null, index: number): string =>
    counts === null ? '–' : rate(counts[index].bads, counts[index].goods + counts[index].bads);
  const kept = isKept(entry);
  const ladder = new Ladder(sheet, entry.bins, holdOut, outOfTime);
  const drawn = entry.bins.some((bin) => logOdds(bin) !== null);

  writer.table(
    writer.labelWithUnit(entry.column),
    bothEvidences(input, classed),
    {
      columns: [
        { title: 'Bin', grow: 1 },
        { title: 'Rows', align: 'right' },
        { title: 'Share', align: 'right' },
        { title: 'Goods', align: 'right' },
        { title: 'Bads', align: 'right' },
        { title: 'Bad rate', align: 'right' },
        { title: 'Hold-out', align: 'right' },
        { title: 'Out-of-time', align: 'right' },
        { title: 'WOE', align: 'right' },
        ...(kept ? [{ title: 'Points', align: 'right' as const }] : []),
      ],
      spans: [
        { title: '', columns: 1 },
        { title: 'Development', columns: 5 },
        { title: 'Bad rate elsewhere', columns: 2 },
      ],
      rows: entry.bins.map((bin, index) => ({
        cells: [
          bin.label,
          whole(bin.rows),
          percent(rows > 0 ? bin.rows / rows : null),
          counted(bin.goods),
          counted(bin.bads),
          rate(bin.bads, bin.goods + bin.bads),
          later(holdOut, index),
          isCovered(input, 'outOfTime') ? 'covered' : later(outOfTime, index),
          woe(bin.woe),
          ...(kept ? [whole(bin.pointsRounded)] : []),
        ],
      })),
      ...(drawn
        ? {
            drawing: {
              title: 'Log odds',
              width: 104,
              row: (index, box) => ladder.row(index, box),
              axis: { height: 12, draw: (box) => ladder.axis(box) },
            },
          }
        : {}),
    },
    `${entry.column === writer.label(entry.column) ? '' : `Column ${entry.column}; `}IV ${fixed(entry.informationValue, 3)}${kept ? '' : '; not in the model'}.`,
  );
  writeEdits(writer, classed);
}

/** Counts of development come with the result, those of the other partitions with the classing: both are named where they differ. */
function bothEvidences(input: DocumentInput, classed: ClassedCharacteristic | null): string | null {
  const other = classed === null ? null : (input.classing?.evidence ?? null);
  if (input.resultEvidence === null || other === null || other === input.resultEvidence) return input.resultEvidence ?? other;
  return `${input.resultEvidence}, ${other}`;
}

function writeEdits(writer: Writer, classed: ClassedCharacteristic | null): void {
  if (classed === null || classed.edits.length === 0) return;
  writer.table(`Edits by hand of ${writer.label(classed.column)}`, writer.input.classing?.evidence ?? null, {
    columns: [{ title: 'When' }, { title: 'Who', grow: 1 }, { title: 'What', grow: 3 }, { title: 'Reason', grow: 3 }],
    rows: classed.edits.map((edit) => ({ cells: [timeText(edit.at), edit.by, edit.edit, edit.reason ?? 'not evidenced'] })),
  });
}
