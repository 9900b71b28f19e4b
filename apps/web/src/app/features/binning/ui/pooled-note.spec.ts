import { TestBed } from '@angular/core/testing';
import type { FineClasses } from '@tallystone/numeric/bench';
import { describe, expect, it } from 'vitest';
import { PooledNote } from './pooled-note';

function shown(fine: Pick<FineClasses, 'pooled' | 'categories'>): string {
  const fixture = TestBed.createComponent(PooledNote);
  fixture.componentRef.setInput('fine', fine);
  fixture.detectChanges();
  return (fixture.nativeElement as HTMLElement).textContent.replace(/\s+/g, ' ').trim();
}
const towns = (count: number): string[] => Array.from({ length: count }, (_, i) => `Town ${i}`);

describe('the note of pooled categories', () => {
  it('says how many are classed as one, and names them', () => {
    expect(shown({ categories: ['north', 'south', 'rarer categories'], pooled: { name: 'rarer categories', categories: towns(2) } })).toMatch(
      /^The 2 rarest categories of 4 are classed as one, “rarer categories”\. ?Town 0, Town 1\.$/,
    );
  });
  it('names the first of many', () => {
    expect(shown({ categories: ['north', 'rarer categories'], pooled: { name: 'rarer categories', categories: towns(203) } })).toMatch(
      /Town 198, Town 199 and 3 others; the specification lists all of them\.$/,
    );
  });
  it('is not there where every category stands for itself', () => {
    expect(shown({ categories: ['north', 'south'] })).toBe('');
  });
});
