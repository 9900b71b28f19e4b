import { randomUUID } from 'node:crypto';
import type { Bins, NumericBins } from '@tallystone/contracts/binnings/bins';
import type { SentEdit } from '@tallystone/contracts/binnings/edits';
import type { Binning, CharacteristicDetail } from '@tallystone/contracts/binnings/schema';
import type { Bins as BenchBins, EditOf } from '@tallystone/numeric/bench';
import { classApplicants, defineApplicants } from './binned';
import { IntakeServer, type Visitor } from './intake';

/** A model with one classed binning, its modeller and a colleague, a modeller of nothing here, and a validator. */
export interface BinningWorld {
  readonly server: IntakeServer;
  readonly modeller: Visitor;
  readonly colleague: Visitor;
  readonly stranger: Visitor;
  readonly validator: Visitor;
  readonly modelId: string;
  readonly definitionId: string;
  readonly sampleId: string;
  readonly binning: Binning;
}

export async function startBinningWorld(
  csv?: string,
  options: Parameters<typeof IntakeServer.start>[0] = {},
): Promise<BinningWorld> {
  const server = await IntakeServer.start(options);
  const modeller = await server.signIn('marian', 'modeller');
  const colleague = await server.signIn('colin', 'modeller');
  const stranger = await server.signIn('oswin', 'modeller');
  const validator = await server.signIn('vera', 'validator');
  const modelId = await modeller.model();
  await modeller.post(`/api/models/${modelId}/members`).send({ personId: colleague.personId }).expect(201);
  const { definitionId, sampleId } = await defineApplicants(modeller, modelId, csv);
  const binning = await classApplicants(modeller, modelId, definitionId);
  return { server, modeller, colleague, stranger, validator, modelId, definitionId, sampleId, binning };
}

/** An edit as the client sends it. */
export const sent = (before: Bins, edit: EditOf<BenchBins> | null, reason: SentEdit['reason'] = null): SentEdit => {
  if (!edit) throw new Error('The edit cannot be done');
  return { id: randomUUID(), kind: edit.kind, what: edit.what, before, after: edit.bins as Bins, reason };
};

export const numeric = (detail: CharacteristicDetail): NumericBins => {
  if (detail.current.kind !== 'numeric') throw new Error('Not numeric');
  return detail.current;
};

export interface RecordEntry {
  readonly action: string;
  readonly actorName: string;
  readonly before: unknown;
  readonly after: unknown;
  readonly detail: unknown;
  readonly reason: string | null;
}

/** What the record says about one entity, latest first. */
export const recordOf = async ({ modeller, modelId }: BinningWorld, entityId: string): Promise<RecordEntry[]> =>
  (await modeller.get(`/api/record?modelId=${modelId}&entityId=${entityId}&limit=200`).expect(200)).body.entries as RecordEntry[];
