import type { BalanceReading, CharacteristicBalance, ComparedPartition } from './balance';

/** How the balance of the partitions is read: the same on the page and in the document. */

/** The usual reading of a stability index (common practice). */
const look = 0.1;
const shift = 0.25;

export const isBeyondChance = (reading: BalanceReading | null): boolean =>
  reading !== null && reading.criticalValue !== null && reading.index > reading.criticalValue;

/** Both readings of one index: by the usual thresholds, and by how far chance alone carries it at these numbers of rows. */
export function readingWords(reading: BalanceReading | null): string {
  if (reading === null) return '\u2013';
  const usual = reading.index > shift ? 'above 0.25' : reading.index >= look ? '0.10 to 0.25' : 'below 0.10';
  return `${usual}, ${isBeyondChance(reading) ? 'more than chance' : 'within chance'}${reading.smoothed ? ', smoothed' : ''}`;
}

/** The reading in which a characteristic differs most from development. */
export const largerReading = ({ holdOut, outOfTime }: CharacteristicBalance): BalanceReading | null =>
  (outOfTime?.index ?? -1) >= (holdOut?.index ?? -1) ? outOfTime : holdOut;

const largestIndex = (characteristic: CharacteristicBalance): number => largerReading(characteristic)?.index ?? -1;

/** The most unlike first; equals in the order of the file. */
export const byIndex = (characteristics: readonly CharacteristicBalance[]): CharacteristicBalance[] =>
  [...characteristics].sort((a, b) => largestIndex(b) - largestIndex(a));

/**
 * The sentence over the table, the first rule that holds: characteristics above 0.25; characteristics of 0.10 and more; else how many indices are larger
 * than chance explains, beside how many of as many would be by chance alone (one in twenty).
 *
 * @param name how a column is called
 * @example balanceFinding([{ column: 'age', holdOut: null, outOfTime: null }]) // 'There is no other partition to compare development with.'
 */
export function balanceFinding(
  characteristics: readonly CharacteristicBalance[],
  name: (column: string) => string = (column) => column,
): string {
  const readings = characteristics.flatMap(({ holdOut, outOfTime }) =>
    [holdOut, outOfTime].filter((reading) => reading !== null),
  );
  if (readings.length === 0) return 'There is no other partition to compare development with.';
  const ordered = byIndex(characteristics);
  const named = (wanted: (index: number) => boolean): string[] =>
    ordered.filter((entry) => wanted(largestIndex(entry))).map(({ column }) => name(column));
  const list = (names: readonly string[]): string =>
    names.length > 4 ? `${names.slice(0, 4).join(', ')} and ${names.length - 4} more` : names.join(', ');
  const shifted = named((index) => index > shift);
  if (shifted.length > 0)
    return `${shifted.length} ${shifted.length === 1 ? 'characteristic is' : 'characteristics are'} spread differently than in development, with an index above 0.25: ${list(shifted)}.`;
  const looked = named((index) => index >= look);
  if (looked.length > 0)
    return `${looked.length} ${looked.length === 1 ? 'characteristic deserves' : 'characteristics deserve'} a look, with an index of 0.10 or more: ${list(looked)}.`;
  const beyond = readings.filter(isBeyondChance).length;
  return `No index reaches 0.10; the largest is ${largestIndex(ordered[0]).toFixed(3)} (${name(ordered[0].column)}). ${beyond} of ${readings.length} ${readings.length === 1 ? 'index' : 'indices'} ${beyond === 1 ? 'is' : 'are'} more than chance carries, where about ${(readings.length / 20).toFixed(0)} would be by chance alone.`;
}

/** How many compared partitions are named; of the others the number stands. */
const named = 12;

/**
 * What was compared before a definition was confirmed, without the full stop: a citation may follow.
 * @example comparedWords([]) // 'No partition was compared before the definition was confirmed'
 */
export function comparedWords(compared: readonly ComparedPartition[]): string {
  if (compared.length === 0) return 'No partition was compared before the definition was confirmed';
  const list = compared
    .slice(-named)
    .map(
      ({ partition, largest }) =>
        `${partition} (${largest === null ? 'nothing to compare with' : `largest index ${largest.toFixed(3)}`})`,
    );
  const head = compared.length === 1 ? 'One partition was compared' : `${compared.length} partitions were compared`;
  return `${head} before the definition was confirmed${compared.length > named ? `, the last ${named} of them` : ''}: ${list.join('; ')}`;
}
