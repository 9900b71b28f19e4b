import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { DraftContent } from '@tallystone/contracts/samples/definition';
import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import type { DataReading } from '@tallystone/contracts/specification/types';
import type { Sequelize } from 'sequelize';
import { Columns, type NumberView } from '../../replay/columns';
import { applyExclusions } from '../../replay/exclusions';
import { assignOutcome } from '../../replay/outcome';
import type { SourceColumn } from '../../replay/source';
import { INDETERMINATE, NO_OUTCOME } from '../../replay/types';
import { needsWeight } from '../../replay/weight';
import { openSample } from '../../storage/columnStore';
import { type Settled, columnsOfSettled, settledOf } from './settled';
import type { WeightFaults } from './weight-sentences';

/**
 * Counts what is wrong with the weights of a draft, in the rows that need one; null where nothing can be. A profile alone cannot tell: it has the
 * smallest value without its count, and leaves out what it takes for a special code, as -1 often is.
 */
export async function weightFaultsOf(
  sequelize: Sequelize,
  sample: { readonly id: string; readonly sha256: string; readonly reading: ReadingChoices | null; readonly rows: number | null },
  draft: DraftContent,
  profiles: readonly ColumnProfile[],
): Promise<WeightFaults | null> {
  const name = draft.columns.find(({ role }) => role === 'weight')?.column;
  const profile = profiles.find(({ column }) => column === name);
  if (!profile || profile.hashed || sample.reading === null || sample.rows === null || !isDoubtful(profile)) return null;
  const { sha256, reading, rows } = sample;
  const data = { sha256, ...reading };
  const column = (await openSample(sequelize, sample.id, [profile.column])).column(profile.column);
  if (!column) return null;
  const view = viewOf(profile.column, column, rows, data);
  const faulty = faultyRows(view, rows);
  if (faulty.length === 0) return null;
  // Only where something is wrong the other columns are read, too.
  const settled = settledOf(draft, profiles);
  const names = columnsOfSettled(settled);
  const source = await openSample(sequelize, sample.id, names);
  const needs = rowsWithWeight(settled, new Columns({ rows, column: (name) => source.column(name) }, data));
  return countFaults(faulty.filter(needs), view);
}

/** Whether a row of this column may hold something else than a number of at least 0. */
const isDoubtful = ({ kind, missing, numeric, specialSuspects, flags }: ColumnProfile): boolean =>
  kind !== 'numeric' ||
  missing > 0 ||
  (numeric !== null && numeric.smallest < 0) ||
  specialSuspects.length > 0 ||
  flags.some(({ code }) => code === 'unreadable-numbers');

function viewOf(name: string, column: SourceColumn, rows: number, data: DataReading): NumberView {
  const view = new Columns({ rows, column: () => column }, data).numbers(name);
  if (!view) throw new Error(`Column ${name} cannot be read as numbers`);
  return view;
}

function faultyRows(view: NumberView, rows: number): number[] {
  const faulty: number[] = [];
  for (let row = 0; row < rows; row++) if (!(view.number(row) >= 0)) faulty.push(row);
  return faulty;
}

/** Whether a row needs a weight, as far as the draft can tell: whoever has no meaning yet may still become a good or a bad. */
function rowsWithWeight({ exclusions, outcome, declined }: Settled, columns: Columns): (row: number) => boolean {
  const exclusion = applyExclusions(exclusions, columns, []);
  if (!outcome) return (row) => exclusion[row] === 0;
  const found = assignOutcome({ exclusions, outcome, declined }, columns, exclusion, []).outcome;
  // Indeterminates too: a fit is made again with them as good and as bad.
  return (row) => needsWeight(found[row]) || found[row] === INDETERMINATE || (exclusion[row] === 0 && found[row] === NO_OUTCOME);
}

function countFaults(faulty: readonly number[], view: NumberView): WeightFaults {
  let [missing, negative, unreadable, smallest] = [0, 0, 0, 0];
  const texts = new Map<string, number>();
  for (const row of faulty) {
    const weight = view.number(row);
    if (weight < 0) {
      negative++;
      smallest = Math.min(smallest, weight);
    } else if (view.missing(row)) missing++;
    else {
      unreadable++;
      const text = view.text(row);
      // Whatever stands there once per row is no example worth its memory.
      if (texts.has(text) || texts.size < 1000) texts.set(text, (texts.get(text) ?? 0) + 1);
    }
  }
  const examples = [...texts]
    .sort((a, b) => b[1] - a[1])
    .slice(0, 3)
    .map(([text]) => text);
  return { missing, negative, smallest: negative > 0 ? smallest : null, unreadable, examples };
}
