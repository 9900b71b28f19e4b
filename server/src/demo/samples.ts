import { readFile } from 'node:fs/promises';
import { resolve } from 'node:path';
import type { DraftContent } from '@tallystone/contracts/samples/definition';
import type { Context } from '../context';
import { rows } from '../database/sql';
import { inTransaction } from '../database/transaction';
import type { Actor } from '../models/person';
import type { FoundModel } from '../services/models/find-model';
import { confirmDraft } from '../services/samples/confirm-draft';
import { confirmReading } from '../services/samples/confirm-reading';
import { findDictionary } from '../services/samples/dictionary/find';
import { importDictionary } from '../services/samples/dictionary/import';
import { findDraft, saveDraft } from '../services/samples/draft';
import { type FoundSample, findSample, samplesOf } from '../services/samples/find-sample';
import { previewReading } from '../services/samples/preview';
import { answerUpload, beginUpload } from '../services/samples/uploads';
import { runToEnd } from './run-to-end';

/** Beside the project's own files: the demo is started from its folder. */
const file = 'data-demo/saltmarsh-personal-loans.csv';
const fileName = 'saltmarsh-personal-loans.csv';

const dictionary = 'data-demo/dictionary.csv';

/**
 * The demo's sample: sent, read, defined and confirmed by the modeller through the same services as anyone's. Goes on from wherever an
 * earlier attempt stopped.
 *
 * @returns the sample and its confirmed definition
 */
export async function ensureDemoSample(
  context: Context,
  model: FoundModel,
  modeller: Actor,
): Promise<{ sampleId: string; definitionId: string }> {
  const [known] = await rows<{ sampleId: string; definitionId: string }>(
    context.sequelize,
    `SELECT d.sample_id AS "sampleId", d.id AS "definitionId" FROM sample_definitions d JOIN samples s ON s.id = d.sample_id
      WHERE d.model_id = $1 AND s.file_name = $2 ORDER BY d.created_at LIMIT 1`,
    [model.id, fileName],
  );
  if (known) {
    await takeDictionary(context, await found(context, model, known.sampleId), modeller);
    return known;
  }
  const there = (await samplesOf(context.sequelize, model)).find((sample) => sample.fileName === fileName);
  let sample = there ?? (await send(context, model, modeller));
  if (!sample.read) {
    const { choices } = await previewReading(context, sample, {});
    const received = sample;
    await runToEnd(context, (tx) => confirmReading(context, tx, modeller, received, choices, 'demo'));
    sample = await found(context, model, sample.id);
  }
  await takeDictionary(context, sample, modeller);
  await defineDraft(context, sample, modeller);
  const { definitionId } = await runToEnd<{ definitionId: string }>(context, async (tx) => {
    const draft = await findDraft(context, sample, tx, true);
    if (!draft) throw new Error('The demo sample has no draft');
    return confirmDraft(context, tx, modeller, draft, draft.revision, 'demo');
  });
  return { sampleId: sample.id, definitionId };
}

async function send(context: Context, model: FoundModel, modeller: Actor): Promise<FoundSample> {
  const bytes = await readFile(resolve(file));
  const metadata = `filename ${Buffer.from(fileName).toString('base64')}`;
  const { id } = await beginUpload(
    context,
    model,
    modeller,
    new Headers({ 'Upload-Length': String(bytes.length), 'Upload-Metadata': metadata }),
  );
  await answerUpload(
    context,
    new Request(`http://localhost/api/models/${model.id}/uploads/${id}`, {
      method: 'PATCH',
      headers: {
        'Tus-Resumable': '1.0.0',
        'Upload-Offset': '0',
        'Content-Type': 'application/offset+octet-stream',
        'Content-Length': String(bytes.length),
      },
      body: new Uint8Array(bytes),
    }),
  );
  const [sample] = await samplesOf(context.sequelize, model);
  return sample;
}

/** Labels, units and special codes, from the file that lies beside the data. */
async function takeDictionary(context: Context, sample: FoundSample, modeller: Actor): Promise<void> {
  const text = await readFile(resolve(dictionary), 'utf8');
  await inTransaction(context.sequelize, async (tx) => {
    const held = await findDictionary(context.sequelize, await findSample(context.sequelize, sample.modelId, sample.id, tx, true), tx);
    if (held?.revision === 0) await importDictionary(context, tx, modeller, held, text);
  });
}

/** Columns that are not what their values suggest. */
const decided: Readonly<Record<string, Partial<DraftContent['columns'][number]>>> = {
  age_band: { role: 'not used', protected: true, reason: 'Protected: kept for fairness checks, not for the fit.' },
  region: { role: 'segment', reason: 'No points by region: the branches of a region answer for its loans, and figures are wanted by it.' },
};

/** What Mara decides: declined applicants apart, staff loans out, the last half-year out-of-time. */
async function defineDraft(context: Context, sample: FoundSample, modeller: Actor): Promise<void> {
  await inTransaction(context.sequelize, async (tx) => {
    const draft = await findDraft(context, sample, tx, true);
    if (!draft) throw new Error('The demo sample has no draft');
    const content: DraftContent = {
      ...draft.content,
      columns: draft.content.columns.map((column) => ({
        ...column,
        ...decided[column.column],
      })),
      outcome: { good: ['good'], bad: ['bad'], indeterminate: ['indeterminate'], excluded: [] },
      declined: { values: ['declined'] },
      exclusions: [
        { reason: 'Loans to staff, granted on staff terms', combine: 'all', tests: [{ column: 'channel', in: ['staff'] }] },
      ],
      partition: { by: 'seed', seed: 7, holdOutShare: 0.3, outOfTime: { from: '2025-01-01', to: null } },
    };
    await saveDraft(context, tx, modeller, draft, content);
  });
}

async function found(context: Context, model: FoundModel, sampleId: string): Promise<FoundSample> {
  const sample = await findSample(context.sequelize, model.id, sampleId);
  if (!sample) throw new Error(`Sample ${sampleId} is gone`);
  return sample;
}
