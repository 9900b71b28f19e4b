import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import { fileLimits } from '@tallystone/contracts/samples/schema';
import { DuplicateRows } from '../../profiling/duplicates';
import { type Personal, hashText, personalColumn } from '../../profiling/personal';
import { type ColumnSegment, readSegments } from '../../reading/index';
import { segmentRows, storeSegment } from '../../storage/columnStore';
import { readRawFile } from '../../storage/rawFiles';
import type { ReadRows, Reading } from './read-rows';

/**
 * Reads any file by the careful scanner, which names every problem with its line and record, and stores what it reads. Slower than the fast
 * reader, and the measure of what that one gives.
 */
export async function readCarefully(reading: Reading, readingId: string): Promise<ReadRows> {
  const { run, choices, key, sampleId } = reading;
  const { sequelize, config } = run.context;
  const file = readSegments(readRawFile(sequelize, config.keys.rawFiles.subarray(0, 32), sampleId, run.signal), choices, {
    mostRows: fileLimits.rows,
    mostColumns: fileLimits.columns,
    mostCharacters: fileLimits.cellBytes,
    segmentRows,
    signal: run.signal,
    onProgress: ({ bytes }) => reading.progress(bytes),
  });
  const isMissing = missingIn(choices);
  const duplicates = new DuplicateRows();
  let personal: (Personal | null)[] = [];
  let segment = 0;
  for await (const part of file.segments) {
    run.signal.throwIfAborted();
    if (segment === 0)
      personal = part.columns.map((column, position) => judgePersonal(file.facts().header[position], column, isMissing));
    duplicates.add(part.columns, part.rows);
    const columns = part.columns.map((values, position) => ({
      position,
      values: personal[position]
        ? { codes: values.codes, texts: values.texts.map((text) => (isMissing(text) ? text : hashText(key, text))) }
        : values,
    }));
    await run.write((tx) => storeSegment(sequelize, readingId, segment, columns, tx));
    segment++;
  }
  const facts = file.facts();
  return { facts, personal, duplicateRows: facts.problems.length > 0 ? 0 : duplicates.count() };
}

const missingIn = (choices: ReadingChoices): ((text: string) => boolean) => {
  const tokens = new Set(choices.missing);
  return (text) => text === '' || tokens.has(text);
};

function judgePersonal(name: string, { codes, texts }: ColumnSegment, isMissing: (text: string) => boolean): Personal | null {
  const counts = new Uint32Array(texts.length);
  for (const code of codes) counts[code]++;
  return personalColumn(name, texts, counts, isMissing);
}
