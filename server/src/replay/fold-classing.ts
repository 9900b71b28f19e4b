import { binOf } from '@tallystone/numeric';
import type { BinnedCharacteristic, Characteristic, Specification } from '@tallystone/contracts/specification/types';
import { cutLabels, regularBins } from './bins';
import { automaticEdges, automaticGroups } from './classing';
import { Columns } from './columns';
import type { FitRows } from './fit-rows';
import { refuse, type ReplayProblem } from './problems';
import type { ColumnSource } from './source';
import { NO_BIN, type CodeMatrix } from './types';
import { gatherCodes, woeTable, type WoeTable } from './woe';

/**
 * Classing repeated inside cross-validation. "woe": the bins stay, their WOE comes from the training rows. "cuts": automatic classing is
 * run anew on the training rows too; bins that carry a decision by hand (made by hand, or with a special, missing or unseen value
 * joined to a bin of cuts) are held, and counted.
 */
export interface FoldClassing {
  /** Bins and WOE of one fold, over the entries of the fit rows. */
  classed(fold: number, training: Uint8Array): FoldBins[];
  /** Number of characteristics whose bins were held under "cuts". */
  heldByHand: number;
}

/** One characteristic in one fold; null codes for "linear". */
export interface FoldBins {
  codes: Uint8Array | null;
  table: WoeTable | null;
}

export function foldClassing(
  spec: Specification,
  coded: CodeMatrix,
  fitRows: FitRows,
  source: ColumnSource | null,
): FoldClassing {
  const cuts = spec.fit.folds?.classing === 'cuts';
  const columns = source === null ? null : new Columns(source, spec.data);
  const problems: ReplayProblem[] = [];
  const codes = coded.characteristics.map((one) => (one.codes === null ? null : gatherCodes(one, fitRows)));
  const recoders = coded.characteristics.map(({ characteristic }, index) => {
    const held = codes[index];
    if (!cuts || held === null || characteristic.coding === 'linear' || isHeld(characteristic)) return null;
    if (columns === null) {
      problems.push({
        code: 'needs-source',
        message: 'Classing cuts in every fold needs the sample itself.',
        where: { column: characteristic.column },
      });
      return null;
    }
    return characteristic.kind === 'numeric'
      ? numericRecoder(characteristic, columns, held, fitRows)
      : categoricalRecoder(characteristic, columns, held, fitRows);
  });
  refuse(problems);
  return {
    heldByHand: cuts
      ? coded.characteristics.filter(({ characteristic }) => characteristic.coding !== 'linear' && isHeld(characteristic)).length
      : 0,
    classed(fold, training) {
      const faults: ReplayProblem[] = [];
      const classed = coded.characteristics.map(({ characteristic, bins }, index): FoldBins => {
        const held = codes[index];
        if (held === null) return { codes: null, table: null };
        const recoded = recoders[index]?.(training) ?? { codes: held, labels: bins.map((bin) => bin.label) };
        return {
          codes: recoded.codes,
          table: woeTable(characteristic.column, recoded.labels, recoded.codes, fitRows, spec.woe, training, fold, faults),
        };
      });
      refuse(faults);
      return classed;
    },
  };
}

/** True if the bins hold a decision that automatic classing cannot repeat. */
export function isHeld(characteristic: BinnedCharacteristic): boolean {
  if (characteristic.classing.made === 'by hand') return true;
  const joined = characteristic.special.some((entry) => entry.bin !== 'own') || typeof characteristic.missing === 'number';
  return joined || (characteristic.kind === 'categorical' && characteristic.unseen !== 'neutral');
}

type Recoder = (training: Uint8Array) => { codes: Uint8Array; labels: string[] };

/** Own bins (special, missing) keep their order behind the new regular bins. */
function ownBins(
  characteristic: Characteristic & BinnedCharacteristic,
  held: Uint8Array,
): { isOwn: (index: number) => boolean; regular: number; labels: string[] } {
  const regular = regularBins(characteristic);
  const labels = characteristic.special.map((entry) => entry.label);
  if (characteristic.missing === 'own') labels.push('missing');
  return { isOwn: (index) => held[index] !== NO_BIN && held[index] >= regular, regular, labels };
}

function numericRecoder(
  characteristic: BinnedCharacteristic & { kind: 'numeric' },
  columns: Columns,
  held: Uint8Array,
  fitRows: FitRows,
): Recoder {
  const view = columns.numbers(characteristic.column);
  const own = ownBins(characteristic, held);
  const values = new Float64Array(held.length);
  for (let index = 0; index < values.length; index++)
    values[index] = own.isOwn(index) || view === null ? NaN : view.number(fitRows.rows[index]);
  const { classing, closed } = characteristic;
  return (training) => {
    const edges =
      classing.made === 'automatic'
        ? automaticEdges(values, fitRows.outcome, fitRows.weights, classing, closed, training)
        : characteristic.edges;
    const shift = edges.length + 1 - own.regular;
    const codes = held.map((code, index) =>
      own.isOwn(index) ? code + shift : code === NO_BIN ? NO_BIN : binOf(values[index], edges, closed),
    );
    return { codes, labels: [...cutLabels(edges, closed), ...own.labels] };
  };
}

function categoricalRecoder(
  characteristic: BinnedCharacteristic & { kind: 'categorical' },
  columns: Columns,
  held: Uint8Array,
  fitRows: FitRows,
): Recoder {
  const column = columns.text(characteristic.column);
  const own = ownBins(characteristic, held);
  const texts = column?.texts ?? [];
  const categories = new Int32Array(held.length).fill(-1);
  // Unlisted categories take part: on the training rows they are as good as any.
  const special = new Set(characteristic.special.flatMap((entry) => entry.values));
  for (let index = 0; index < held.length; index++) {
    const code = column?.codes[fitRows.rows[index]] ?? 0;
    if (!own.isOwn(index) && !columns.isMissing(texts[code]) && !special.has(texts[code])) categories[index] = code;
  }
  const { classing } = characteristic;
  return (training) => {
    if (classing.made !== 'automatic') return { codes: held, labels: characteristic.groups.map((group) => group.join(', ')) };
    const { groupOf, groups } = automaticGroups(categories, texts.length, fitRows.outcome, fitRows.weights, classing, training);
    const shift = groups - own.regular;
    const codes = held.map((code, index) => {
      if (own.isOwn(index)) return code + shift;
      const group = categories[index] < 0 ? -1 : groupOf[categories[index]];
      return group < 0 ? NO_BIN : group;
    });
    return { codes, labels: [...Array.from({ length: groups }, (_, group) => `group ${group + 1}`), ...own.labels] };
  };
}
