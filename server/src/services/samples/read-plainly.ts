import { randomInt } from 'node:crypto';
import { mostCellCharacters } from '@tallystone/contracts/samples/reading';
import { fileLimits } from '@tallystone/contracts/samples/schema';
import { DuplicateRows } from '../../profiling/duplicates';
import type { Personal } from '../../profiling/personal';
import { WritingsByColumn } from '../../profiling/writings';
import { NotPlain } from '../../reading/plain/field-index';
import type { NumberStyle } from '../../reading/plain/number-style';
import { type RecordsOfSegment, splitRecords } from '../../reading/plain/split-records';
import { segmentRows, storeContents } from '../../storage/columnStore';
import { readRawFile } from '../../storage/rawFiles';
import type { CodeAnswer } from '../../threads/code-segment';
import { runInThread, threadCount, warmThreads } from '../../threads/run-in-thread';
import type { ReadRows, Reading } from './read-rows';

/** Fields of a segment after the first: with 100 columns half as many rows as the first has. */
const segmentFields = 50 * segmentRows;

/**
 * Reads a file in which nothing is unusual: this thread finds where records end, the worker threads code whole segments of records as bytes,
 * and what they give is stored while they go on. In memory are the segments under way, one for each thread and one that is gathered; their memory is
 * used again from segment to segment.
 *
 * @throws NotPlain when the file has to be read carefully from its beginning; nothing of what was stored may then be used
 */
export async function readPlainly(reading: Reading, readingId: string): Promise<ReadRows> {
  const { run, choices, key, sampleId } = reading;
  const { sequelize, config } = run.context;
  const stop = new AbortController();
  const signal = AbortSignal.any([run.signal, stop.signal]);
  const file = splitRecords(readRawFile(sequelize, config.keys.rawFiles.subarray(0, 32), sampleId, signal), choices, {
    mostRows: fileLimits.rows,
    mostColumns: fileLimits.columns,
    segmentRows,
    segmentFields,
    signal,
    onProgress: ({ bytes }) => reading.progress(bytes),
  });
  warmThreads();
  const seed = randomInt(1, 0x7fff_ffff);
  const duplicates = new DuplicateRows();
  const writings = new WritingsByColumn();
  let personal: readonly (Personal | null)[] | null = null;
  let styles: readonly (NumberStyle | null)[] = [];
  let writing: Promise<void> = Promise.resolve();

  const code = async (records: RecordsOfSegment): Promise<Extract<CodeAnswer, { notPlain: null }>> => {
    const { delimiter, trim, decimal, missing, dateOrder, dateTimes, notDates } = choices;
    const answer = await runInThread(
      'sample.code',
      {
        ...records,
        header: file.facts().header,
        choices: { delimiter, trim, decimal, missing, dateOrder, dateTimes, notDates },
        mostBytes: mostCellCharacters,
        seed,
        styles,
        personal,
        key,
      },
      { signal },
    );
    file.takeBack(records);
    if (answer.notPlain !== null) throw new NotPlain(answer.notPlain);
    return answer;
  };
  const store = (segment: number, { contents, rows }: { contents: readonly Uint8Array[]; rows: number }): Promise<void> => {
    const columns = contents.map((content, position) => ({
      position,
      rows,
      content: Buffer.from(content.buffer, content.byteOffset, content.byteLength),
    }));
    writing = writing.then(() => run.write((tx) => storeContents(sequelize, readingId, segment, columns, tx)));
    return writing;
  };

  const underWay = new Set<Promise<void>>();
  try {
    let segment = 0;
    for await (const records of file.segments) {
      const place = segment++;
      const work = code(records).then((coded) => {
        personal ??= coded.personal;
        styles = coded.styles.map((style, position) => style ?? styles[position] ?? null);
        duplicates.addKeys(coded.keys);
        coded.writings.forEach((found, position) => writings.add(position, found));
        return store(place, coded);
      });
      // What identifies people is judged on the first segment, before anything of the others is stored.
      if (place === 0) await work;
      else {
        underWay.add(work);
        work.then(
          () => underWay.delete(work),
          () => undefined,
        );
        if (underWay.size > threadCount()) await Promise.race(underWay);
      }
    }
    await Promise.all(underWay);
  } catch (thrown) {
    stop.abort(thrown);
    await Promise.allSettled(underWay);
    run.signal.throwIfAborted();
    throw thrown;
  }
  return {
    facts: file.facts(),
    personal: personal ?? [],
    duplicateRows: duplicates.count(),
    writings: writings.distinct(),
    doubtful: null,
  };
}
