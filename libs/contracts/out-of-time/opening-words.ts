import type { Opening } from './schema';

const times = (count: number): string => (count === 1 ? '1 time' : `${count} times`);

/** How often, and how much of that under other definitions of the same rows: "opened 3 times, 2 of them under an earlier definition". Null where never. */
export function openingWords(openings: readonly Pick<Opening, 'under'>[]): string | null {
  if (openings.length === 0) return null;
  const elsewhere = openings.filter(({ under }) => under !== 'this');
  if (elsewhere.length === 0) return `opened ${times(openings.length)}`;
  const which = elsewhere.every(({ under }) => under === 'earlier') ? 'an earlier definition' : 'another definition';
  if (elsewhere.length < openings.length) return `opened ${times(openings.length)}, ${elsewhere.length} of them under ${which}`;
  return openings.length === 1 ? `opened 1 time, under ${which}` : `opened ${times(openings.length)}, all of them under ${which}`;
}
