import { describe, expect, it } from 'vitest';
import { openingWords } from './opening-words';

const looks = (...under: ('this' | 'earlier' | 'later')[]) => under.map((one) => ({ under: one }));

describe('how often out-of-time was opened', () => {
  it('says how much of it happened under other definitions of the same rows', () => {
    expect(openingWords([])).toBeNull();
    expect(openingWords(looks('this'))).toBe('opened 1 time');
    expect(openingWords(looks('earlier'))).toBe('opened 1 time, under an earlier definition');
    expect(openingWords(looks('earlier', 'earlier'))).toBe('opened 2 times, all of them under an earlier definition');
    expect(openingWords(looks('earlier', 'this', 'this'))).toBe('opened 3 times, 1 of them under an earlier definition');
    expect(openingWords(looks('earlier', 'this', 'later'))).toBe('opened 3 times, 2 of them under another definition');
  });
});
