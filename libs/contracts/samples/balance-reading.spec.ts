import { describe, expect, it } from 'vitest';
import { comparedWords } from './balance-reading';

const entry = (seed: number, largest: number | null) => ({
  partition: `seed ${seed}, 30 % hold-out`,
  largest,
  comparedAt: '2026-11-03T09:00:00.000Z',
  comparedBy: 'Modeller at Saltmarsh Mutual',
});

describe('what was compared before a definition was confirmed', () => {
  it('stands in one sentence, every partition with its largest index', () => {
    expect(comparedWords([])).toBe('No partition was compared before the definition was confirmed');
    expect(comparedWords([entry(7, 0.0123)])).toBe('One partition was compared before the definition was confirmed: seed 7, 30 % hold-out (largest index 0.012)');
    expect(comparedWords([entry(7, null), entry(8, 0.2)])).toBe(
      '2 partitions were compared before the definition was confirmed: seed 7, 30 % hold-out (nothing to compare with); seed 8, 30 % hold-out (largest index 0.200)',
    );
  });
  it('says how many there were where not all are named', () => {
    const words = comparedWords(Array.from({ length: 30 }, (_, seed) => entry(seed, 0.01)));
    expect(words).toMatch(/^30 partitions were compared before the definition was confirmed, the last 12 of them: seed 18, /);
    expect(words.split('; ')).toHaveLength(12);
  });
});
