import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import { guessOutcome } from '../../profiling/guess-outcome';
import type { OutcomeCodes } from '../../profiling/leakage';
import { headingNamesOutcome } from '../../profiling/suggest-role';
import { readContents, readStoredColumn } from '../../storage/columnStore';
import { runInThread } from '../../threads/run-in-thread';
import { inTurn } from './in-turn';
import type { ReadRows, Reading } from './read-rows';

/**
 * The profiles of all columns of a reading, made in the worker threads, each column read back once: those whose heading names an outcome come
 * first, because what is said of leakage needs it.
 */
export async function profileReading(
  { run, choices }: Reading,
  readingId: string,
  { facts, personal, writings }: ReadRows,
  progress: (share: number) => void,
): Promise<ColumnProfile[]> {
  const { sequelize } = run.context;
  const { header, rows } = facts;
  const profiles = new Map<number, ColumnProfile>();
  const profile = async (position: number, outcome: OutcomeCodes | null): Promise<void> => {
    run.signal.throwIfAborted();
    const contents = await readContents(sequelize, readingId, position);
    profiles.set(
      position,
      await runInThread(
        'sample.profile',
        { name: header[position], position, contents, choices, personal: personal[position] ?? null, writings: writings.get(position) ?? null, outcome },
        { signal: run.signal, transfer: contents.map(({ buffer }) => buffer) },
      ),
    );
    progress(profiles.size / header.length);
  };

  const positions = header.map((_, position) => position);
  const candidates = positions.filter((position) => headingNamesOutcome(header[position]));
  await inTurn(candidates, (position) => profile(position, null));
  const found = candidates.flatMap((position) => profiles.get(position) ?? []);
  const outcome = await guessOutcome(found, (position) => readStoredColumn(sequelize, readingId, position, rows));
  const shared = outcome && new Uint8Array(new SharedArrayBuffer(outcome.length));
  if (outcome) shared?.set(outcome);
  const rest = positions.filter((position) => {
    const known = profiles.get(position);
    return known === undefined || (outcome !== null && known.suggestedRole === 'characteristic');
  });
  await inTurn(rest, (position) => profile(position, shared));
  return positions.flatMap((position) => profiles.get(position) ?? []);
}
