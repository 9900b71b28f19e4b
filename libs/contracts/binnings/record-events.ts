import { z } from 'zod';
import { recordEvent } from '../record/event';
import { AskedConstraints, Bins, Constraints } from './bins';
import { EditKind } from './edits';

const column = z.string();
/** Automatic: it went out or came in with its bins, when somebody changed these. */
const inclusion = z.strictObject({ column, automatic: z.literal(true).optional() });

export const binningEvents = [
  recordEvent('binning.started', 'binning', {
    after: z.strictObject({
      name: z.string(),
      definitionId: z.uuid(),
      constraints: AskedConstraints,
      fromBinningId: z.uuid().nullable().optional(),
    }),
  }),
  recordEvent('binning.classed', 'binning', { after: z.strictObject({ characteristics: z.int() }) }),
  recordEvent('binning.not-carried', 'binning', {
    detail: z.strictObject({ column, edits: z.int(), leftOut: z.string().nullable() }),
    reason: z.string(),
  }),
  recordEvent('binning.edited', 'binning-characteristic', {
    before: Bins,
    after: Bins,
    detail: z.strictObject({ column, edit: z.uuid(), kind: EditKind, what: z.string() }),
    reason: z.string().optional(),
  }),
  recordEvent('binning.edit-carried', 'binning-characteristic', {
    before: Bins,
    after: Bins,
    detail: z.strictObject({ column, edit: z.uuid(), from: z.uuid(), what: z.string() }),
    reason: z.string().optional(),
  }),
  recordEvent('binning.edit-not-carried', 'binning-characteristic', {
    detail: z.strictObject({ column, from: z.uuid(), what: z.string() }),
    reason: z.string(),
  }),
  recordEvent('binning.edit-undone', 'binning-characteristic', {
    before: Bins,
    after: Bins,
    detail: z.strictObject({ column, edit: z.uuid(), what: z.string() }),
  }),
  recordEvent('binning.edit-redone', 'binning-characteristic', {
    before: Bins,
    after: Bins,
    detail: z.strictObject({ column, edit: z.uuid(), what: z.string() }),
  }),
  recordEvent('binning.reason-given', 'binning-characteristic', {
    detail: z.strictObject({ column, edit: z.uuid(), what: z.string() }),
    reason: z.string(),
  }),
  recordEvent('binning.reclassed', 'binning-characteristic', {
    before: Bins,
    after: Bins,
    detail: z.strictObject({ column, constraints: Constraints, editsDropped: z.int() }),
    reason: z.string().optional(),
  }),
  recordEvent('binning.left-out', 'binning-characteristic', { detail: inclusion, reason: z.string() }),
  recordEvent('binning.taken-in', 'binning-characteristic', {
    detail: inclusion,
    reason: z.string().optional(),
  }),
] as const;
