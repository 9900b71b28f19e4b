import { randomUUID } from 'node:crypto';
import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import type { Transaction } from 'sequelize';
import { deriveKey } from '../../config/keys';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { type DoubtfulPlaces, Sample } from '../../models/sample';
import { Problem } from '../../problems/problem';
import type { ReadingProblem } from '../../reading/index';
import { NotPlain } from '../../reading/plain/field-index';
import { actorOf } from '../people/actor-of';
import { appendRecord } from '../record/append';
import { writeFirstDraft } from './first-draft';
import { readKindsOf } from './keep-kind';
import { problemItem } from './problem-item';
import { profileReading } from './profile-reading';
import { readCarefully } from './read-carefully';
import { readPlainly } from './read-plainly';
import type { ReadRows, Reading } from './read-rows';

/** What reading needs of the run that does it; tests and the demo give their own. */
export interface ReadingRun {
  readonly context: Context;
  readonly run: { readonly id: string; readonly personId: string };
  readonly attempt: number;
  readonly signal: AbortSignal;
  progress(phase: string, share: number | null): void;
  write<T>(work: (tx: Transaction) => Promise<T>): Promise<T>;
  finish(work: (tx: Transaction) => Promise<{ rows: number; columns: number; flags: number }>): Promise<void>;
}

/** Share of the whole that each phase takes, as measured on mixed files. */
const readingShare = 0.7;
const profilingShare = 0.25;

/**
 * Reads a raw file segment by segment and keeps it by column: texts coded, what identifies people as keyed hashes, a profile per column. Memory
 * holds a few segments and one column. A file in which anything is unusual is read again from its beginning by the careful reader. Nothing of
 * it counts before the end, where one transaction points the sample at it.
 *
 * @throws Problem 422 `file-refused` when the file has problems; all of them are then with the sample
 */
export async function readFile(sampleId: string, choices: ReadingChoices, run: ReadingRun): Promise<void> {
  const { context } = run;
  const sample = await Sample.findByPk(sampleId, { rejectOnEmpty: true });
  const size = Number(sample.size);
  const reading: Reading = {
    run,
    sampleId,
    choices,
    key: deriveKey(context.config.keys.identifiers, 'sample columns'),
    progress: (bytes) => run.progress('reading', (readingShare * bytes) / size),
  };
  const read = await readRows(reading);
  const { readingId, facts, duplicateRows, doubtful } = read;
  if (facts.problems.length > 0) await refuseFile(run, sampleId, choices, facts.problems, doubtful);
  if (facts.sha256 !== sample.sha256)
    throw new Error(`The stored file of sample ${sampleId} has another fingerprint than the one that arrived`);

  const profiles = await profileReading(reading, readingId, read, (share) =>
    run.progress('profiling', readingShare + profilingShare * share),
  );
  run.progress('storing', 0.98);
  await run.finish(async (tx) => {
    await storeProfiles(context, tx, readingId, profiles);
    // The reading before goes, and with it what it took the columns for.
    const readBefore = await readKindsOf(context.sequelize, tx, sampleId);
    await Sample.update(
      {
        reading: choices,
        readingId,
        rows: facts.rows,
        columns: facts.header.length,
        duplicateRows,
        problems: [],
        doubtful: null,
      },
      { where: { id: sampleId }, transaction: tx },
    );
    await dropReadings(context, tx, sampleId, readingId);
    await writeFirstDraft(context, tx, sampleId, profiles, readBefore, run.run.personId);
    await appendRecord(tx, {
      actor: await actorOf(run.run.personId, tx),
      action: 'sample.read',
      entity: 'sample',
      entityId: sampleId,
      modelId: sample.modelId,
      after: { rows: facts.rows, columns: facts.header.length, reading: choices, sha256: sample.sha256 },
    });
    return { rows: facts.rows, columns: facts.header.length, flags: profiles.reduce((sum, { flags }) => sum + flags.length, 0) };
  });
}

async function readRows(reading: Reading): Promise<ReadRows & { readingId: string }> {
  const { context } = reading.run;
  try {
    const readingId = await beginReading(reading);
    return { readingId, ...(await readPlainly(reading, readingId)) };
  } catch (thrown) {
    if (!(thrown instanceof NotPlain)) throw thrown;
    context.log.info({ sampleId: reading.sampleId, why: thrown.message }, 'file is read carefully');
  }
  const readingId = await beginReading(reading);
  return { readingId, ...(await readCarefully(reading, readingId)) };
}

/** A reading of its own for each attempt; those that were left before are dropped. */
async function beginReading({ run, sampleId, progress }: Reading): Promise<string> {
  const readingId = randomUUID();
  await run.write(async (tx) => {
    await dropReadings(run.context, tx, sampleId, null);
    await rows(
      run.context.sequelize,
      'INSERT INTO sample_readings (id, sample_id, run_id, attempt) VALUES ($1, $2, $3, $4) RETURNING id',
      [readingId, sampleId, run.run.id, run.attempt],
      tx,
    );
  });
  progress(0);
  return readingId;
}

/** What a run without a result leaves behind: nothing. The sample keeps the reading that it had. */
export async function abandonReading(tx: Transaction, runId: string): Promise<void> {
  const sequelize = Sample.sequelize!;
  await rows(
    sequelize,
    `DELETE FROM sample_readings r USING samples s WHERE r.run_id = $1 AND s.id = r.sample_id AND s.reading_id IS DISTINCT FROM r.id RETURNING r.id`,
    [runId],
    tx,
  );
}

/** Readings that the sample does not point at: those of attempts that were lost or cancelled, and the one before. */
async function dropReadings(context: Context, tx: Transaction, sampleId: string, keep: string | null): Promise<void> {
  await rows(
    context.sequelize,
    `DELETE FROM sample_readings r USING samples s
      WHERE r.sample_id = $1 AND s.id = $1 AND r.id IS DISTINCT FROM s.reading_id AND r.id IS DISTINCT FROM $2::uuid RETURNING r.id`,
    [sampleId, keep],
    tx,
  );
}

async function refuseFile(
  run: ReadingRun,
  sampleId: string,
  choices: ReadingChoices,
  problems: readonly ReadingProblem[],
  doubtful: DoubtfulPlaces | null,
): Promise<never> {
  const items = problems.map(problemItem);
  await run.write(async (tx) => {
    await Sample.update({ reading: choices }, { where: { id: sampleId, readingId: null }, transaction: tx });
    await Sample.update({ problems: items, doubtful }, { where: { id: sampleId }, transaction: tx });
  });
  const detail = items.length === 1 ? items[0].message : `The file has ${items.length} problems; the first: ${items[0].message}`;
  throw new Problem(422, 'file-refused', `${detail} Mend the file and upload it again, or change the reading choices.`, {
    problems: items,
  });
}

async function storeProfiles(
  context: Context,
  tx: Transaction,
  readingId: string,
  profiles: readonly ColumnProfile[],
): Promise<void> {
  for (const profile of profiles) {
    await rows(
      context.sequelize,
      'INSERT INTO sample_columns (reading_id, position, name, kind, hashed, profile) VALUES ($1, $2, $3, $4, $5, $6::jsonb) RETURNING position',
      [readingId, profile.position, profile.column, profile.kind, profile.hashed, JSON.stringify(profile)],
      tx,
    );
  }
}
