import type { Transaction } from 'sequelize';
import type { StoredSummary } from '../../models/binning';
import type { Actor } from '../../models/person';
import { appendRecord } from '../record/append';

/**
 * Whether later fits have a characteristic. It follows from the bins, of which it needs two, until a person decides it; what a person decided stays,
 * whatever becomes of the bins.
 */
export interface Inclusion {
  readonly included: boolean;
  /** Empty while included. */
  readonly leftOutReason: string;
  /** By a person, other than the bins alone would have it. */
  readonly inclusionDecided: boolean;
}

const oneBin = ({ warnings }: Pick<StoredSummary, 'warnings'>) => warnings.find(({ code }) => code === 'one-bin');

/** Of bins that are new, where before was decided so; null where nothing was before. */
export function inclusionOf(summary: Pick<StoredSummary, 'warnings'>, before: Inclusion | null): Inclusion {
  if (before?.inclusionDecided) {
    const { included, leftOutReason } = before;
    return { included, leftOutReason, inclusionDecided: true };
  }
  const one = oneBin(summary);
  return { included: one === undefined, leftOutReason: one?.message ?? '', inclusionDecided: false };
}

/** As a person says. To take in what the bins would have anyway is no decision that outlives them. */
export function inclusionAsked(
  summary: Pick<StoredSummary, 'warnings'>,
  asked: { included: boolean; reason: string },
): Inclusion {
  return asked.included
    ? { included: true, leftOutReason: '', inclusionDecided: oneBin(summary) !== undefined }
    : { included: false, leftOutReason: asked.reason, inclusionDecided: true };
}

/** Records that a characteristic went out or came in with its bins. */
export async function recordInclusion(
  tx: Transaction,
  person: Actor,
  target: { readonly id: string; readonly modelId: string; readonly column: string },
  before: Inclusion,
  now: Inclusion,
): Promise<void> {
  if (before.included === now.included) return;
  const detail = { column: target.column, automatic: true as const };
  const common = {
    actor: person,
    entity: 'binning-characteristic',
    entityId: target.id,
    modelId: target.modelId,
    detail,
  } as const;
  if (now.included)
    await appendRecord(tx, {
      ...common,
      action: 'binning.taken-in',
      reason: 'Its development rows lie in more than one bin now.',
    });
  else await appendRecord(tx, { ...common, action: 'binning.left-out', reason: now.leftOutReason });
}
