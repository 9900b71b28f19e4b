import type { DoubtfulLines as Listed, ReadingChoices } from '@tallystone/contracts/samples/reading';
import type { Context } from '../../context';
import { type DoubtfulPlaces, Sample } from '../../models/sample';
import { LineStarts } from '../../reading/line-starts';
import { readRawFile, readRawParts } from '../../storage/rawFiles';
import type { DoubtfulLines } from './doubtful-lines';
import type { FoundSample } from './find-sample';
import { lookedOfLine, shownLine } from './line-text';
import type { Reading } from './read-rows';

/**
 * The doubtful lines of a whole file. What is kept of them with the sample is where they stand and what is wrong with them; their text stays in the raw
 * file alone, encrypted, and is read from there for whoever may look into the file. So it goes when the rows are erased, and reaches neither the
 * problems of a run nor its events.
 */

/** Where the lines begin that the reader found doubtful; null where there are none. Goes through the file once more, up to the last of them. */
export async function placesOf(
  { run, sampleId, choices: { encoding } }: Reading,
  doubtful: DoubtfulLines,
): Promise<DoubtfulPlaces | null> {
  const { lines, count } = doubtful.found();
  if (count === 0) return null;
  const { sequelize, config } = run.context;
  const begin = new LineStarts(
    encoding,
    lines.map(({ line }) => line),
  );
  for await (const bytes of readRawFile(sequelize, config.keys.rawFiles.subarray(0, 32), sampleId, run.signal))
    if (!begin.push(bytes)) break;
  return {
    encoding,
    count,
    lines: lines.map((found) => ({ ...found, at: begin.startOf(found.line) })),
  };
}

/**
 * The doubtful lines that the last reading found, if it was refused, with their texts.
 *
 * @throws Problem 409 where the rows of the sample were erased
 */
export async function doubtfulLinesOf({ sequelize, config }: Context, sample: FoundSample): Promise<Listed> {
  const stored = await Sample.findByPk(sample.id, { attributes: ['doubtful'] });
  if (!stored?.doubtful) return { lines: [], count: 0 };
  const { encoding, count, lines } = stored.doubtful;
  const key = config.keys.rawFiles.subarray(0, 32);
  const parts = await readRawParts(sequelize, key, sample.rawFileId, { starts: lines.map(({ at }) => at), length: lookedOfLine });
  return {
    count,
    lines: lines.map(({ line, record, doubts }, place) => ({ line, record, ...shownLine(parts[place], encoding), doubts })),
  };
}

/** The same for a part of a file that is at hand. */
export function doubtfulLinesIn(bytes: Buffer, encoding: ReadingChoices['encoding'], doubtful: DoubtfulLines): Listed {
  const { lines, count } = doubtful.found();
  const begin = new LineStarts(
    encoding,
    lines.map(({ line }) => line),
  );
  begin.push(bytes);
  return {
    count,
    lines: lines.map(({ line, record, doubts }) => {
      const at = begin.startOf(line);
      return { line, record, ...shownLine(bytes.subarray(at, at + lookedOfLine), encoding), doubts };
    }),
  };
}
