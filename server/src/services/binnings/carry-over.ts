import type { Bins } from '@tallystone/contracts/binnings/bins';
import type { Sequelize, Transaction } from 'sequelize';
import { randomUUID } from 'node:crypto';
import { BinningEdit } from '../../models/binning';
import type { Actor } from '../../models/person';
import { appendRecord } from '../record/append';
import type { ClassedColumn } from '../../classing/class-column';
import { askedAgain } from '../../classing/definition';
import { type StoredEdit, editsInEffect } from './edits';
import type { Earlier } from './class-characteristics';
import { decidedEarlier } from './find-characteristic';
import type { Inclusion } from './inclusion';
import { words } from './save-bins';

/** A characteristic of the earlier binning, as far as the new one needs it. */
export interface EarlierCharacteristic extends Earlier, Inclusion {
  /** In the order of `edits`. */
  readonly stored: readonly StoredEdit[];
}

/** What the earlier binning decided, by column: constraints, edits in effect, what was left out. Empty without an earlier binning. */
export async function readEarlier(
  sequelize: Sequelize,
  binningId: string | null,
): Promise<ReadonlyMap<string, EarlierCharacteristic>> {
  if (binningId === null) return new Map();
  const found = await decidedEarlier(sequelize, binningId);
  const entries = await Promise.all(
    found.map(async ({ id, column, constraints, included, leftOutReason, inclusionDecided, fine }) => {
      const stored = await editsInEffect(sequelize, id);
      const edits = fine && { fine, edits: stored.map(({ kind, what, before, after }) => ({ kind, what, before, after })) };
      return [
        column,
        { constraints: askedAgain(constraints), included, leftOutReason, inclusionDecided, stored, edits },
      ] as const;
    }),
  );
  return new Map(entries);
}

/** Writes what became of the earlier edits of one characteristic: those made again with their place, the others with the reason why not. */
export async function storeCarried(
  tx: Transaction,
  person: Actor,
  target: { readonly id: string; readonly modelId: string; readonly column: string },
  earlier: EarlierCharacteristic,
  steps: ClassedColumn['carried'],
): Promise<void> {
  const common = { actor: person, entity: 'binning-characteristic', entityId: target.id, modelId: target.modelId } as const;
  let place = 0;
  for (const [index, step] of steps.entries()) {
    const was = earlier.stored[index];
    const made = { id: randomUUID(), characteristicId: target.id, reason: was.reason, carriedFrom: was.id, madeBy: person.id };
    if (step.kept) {
      const bins = { before: step.before as Bins, after: step.after as Bins };
      await BinningEdit.create({ ...made, ...bins, kind: step.kind, what: step.what, place: place++ }, { transaction: tx });
      await appendRecord(tx, {
        ...common,
        ...bins,
        action: 'binning.edit-carried',
        detail: { column: target.column, edit: made.id, from: was.id, what: step.what },
        ...(was.reason ? { reason: words(was.reason) } : {}),
      });
    } else {
      const { kind, what, before, after } = was;
      await BinningEdit.create({ ...made, kind, what, before, after, place: null, notCarried: step.why }, { transaction: tx });
      await appendRecord(tx, {
        ...common,
        action: 'binning.edit-not-carried',
        detail: { column: target.column, from: was.id, what },
        reason: step.why,
      });
    }
  }
}
