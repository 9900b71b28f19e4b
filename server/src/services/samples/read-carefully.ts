import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import { fileLimits } from '@tallystone/contracts/samples/schema';
import { DuplicateRows } from '../../profiling/duplicates';
import { type Personal, hashText, personalColumn } from '../../profiling/personal';
import { WritingsByColumn, watchedColumns, writingsOfTexts } from '../../profiling/writings';
import { type ColumnSegment, readSegments } from '../../reading/index';
import { segmentRows, storeSegment } from '../../storage/columnStore';
import { readRawFile } from '../../storage/rawFiles';
import { DoubtfulLines } from './doubtful-lines';
import { placesOf } from './doubtful-places';
import type { ReadRows, Reading } from './read-rows';

/**
 * Reads any file by the careful scanner, which names every problem with its line and record, and stores what it reads. Slower than the fast
 * reader, and the measure of what that one gives.
 */
export async function readCarefully(reading: Reading, readingId: string): Promise<ReadRows> {
  const { run, choices, key, sampleId } = reading;
  const { sequelize, config } = run.context;
  const doubtful = new DoubtfulLines(true);
  const file = readSegments(readRawFile(sequelize, config.keys.rawFiles.subarray(0, 32), sampleId, run.signal), choices, {
    mostRows: fileLimits.rows,
    mostColumns: fileLimits.columns,
    segmentRows,
    signal: run.signal,
    onProgress: ({ bytes }) => reading.progress(bytes),
    onDoubt: doubtful.onDoubt,
    onRecord: doubtful.onRecord,
  });
  const isMissing = missingIn(choices);
  const duplicates = new DuplicateRows();
  const writings = new WritingsByColumn();
  let personal: (Personal | null)[] = [];
  let segment = 0;
  for await (const part of file.segments) {
    run.signal.throwIfAborted();
    if (segment === 0)
      personal = part.columns.map((column, position) => judgePersonal(file.facts().header[position], column, isMissing));
    duplicates.add(part.columns, part.rows);
    for (const position of watchedColumns(personal)) writings.add(position, writingsOfTexts(part.columns[position].texts, isMissing));
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
  if (facts.problems.length > 0)
    return { facts, personal, duplicateRows: 0, writings: new Map(), doubtful: await placesOf(reading, doubtful) };
  return { facts, personal, duplicateRows: duplicates.count(), writings: writings.distinct(), doubtful: null };
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
