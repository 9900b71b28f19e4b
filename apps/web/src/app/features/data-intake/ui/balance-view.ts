import type { BalanceReading, CharacteristicBalance } from '@tallystone/contracts/samples/balance';
import { DASH, binWords, fixed, plural, share } from '../../../ui/numbers';

/** The usual reading of a stability index (common practice). */
const look = 0.1;
const shift = 0.25;

export const isBeyondChance = (reading: BalanceReading | null): boolean =>
  reading !== null && reading.criticalValue !== null && reading.index > reading.criticalValue;

/** Both readings of one index: by the usual thresholds, and by how far chance alone carries it at these numbers of rows. */
export function readingWords(reading: BalanceReading | null): string {
  if (reading === null) return DASH;
  const usual = reading.index > shift ? 'above 0.25' : reading.index >= look ? '0.10 to 0.25' : 'below 0.10';
  return `${usual}, ${isBeyondChance(reading) ? 'more than chance' : 'within chance'}${reading.smoothed ? ', smoothed' : ''}`;
}

/** "rent: 31.0 % against 24.0 %": what moved most, in the partition with the larger index. */
export function movedMost({ holdOut, outOfTime }: CharacteristicBalance): string {
  const larger = (outOfTime?.index ?? -1) >= (holdOut?.index ?? -1) ? outOfTime : holdOut;
  const largest = larger?.largest;
  return largest ? `${binWords(largest.label)}: ${share(largest.compared)} against ${share(largest.development)}` : DASH;
}

export const largestIndex = ({ holdOut, outOfTime }: CharacteristicBalance): number =>
  Math.max(holdOut?.index ?? -1, outOfTime?.index ?? -1);

/** The most unlike first; equals in the order of the file. */
export const byIndex = (characteristics: readonly CharacteristicBalance[]): CharacteristicBalance[] =>
  [...characteristics].sort((a, b) => largestIndex(b) - largestIndex(a));

/**
 * The sentence over the table, the first rule that holds: characteristics above 0.25; characteristics of 0.10 and more; else how many indices are larger
 * than chance explains, beside how many of as many would be by chance alone (one in twenty).
 */
export function balanceFinding(characteristics: readonly CharacteristicBalance[]): string {
  const readings = characteristics.flatMap(({ holdOut, outOfTime }) => [holdOut, outOfTime].filter((reading) => reading !== null));
  if (readings.length === 0) return 'There is no other partition to compare development with.';
  const named = (from: number): string[] => byIndex(characteristics).filter((entry) => largestIndex(entry) >= from).map(({ column }) => column);
  const [most] = byIndex(characteristics);
  const list = (names: readonly string[]): string => (names.length > 4 ? `${names.slice(0, 4).join(', ')} and ${names.length - 4} more` : names.join(', '));
  const shifted = named(shift).filter((column) => characteristics.some((entry) => entry.column === column && largestIndex(entry) > shift));
  if (shifted.length > 0)
    return `${plural(shifted.length, 'characteristic')} ${shifted.length === 1 ? 'is' : 'are'} spread differently than in development, with an index above 0.25: ${list(shifted)}.`;
  const looked = named(look);
  if (looked.length > 0)
    return `${plural(looked.length, 'characteristic deserves', 'characteristics deserve')} a look, with an index of 0.10 or more: ${list(looked)}.`;
  const beyond = readings.filter(isBeyondChance).length;
  return `No index reaches 0.10; the largest is ${fixed(largestIndex(most), 3)} (${most.column}). ${beyond} of ${plural(readings.length, 'index', 'indices')} ${beyond === 1 ? 'is' : 'are'} more than chance carries, where about ${fixed(readings.length / 20, 0)} would be by chance alone.`;
}
