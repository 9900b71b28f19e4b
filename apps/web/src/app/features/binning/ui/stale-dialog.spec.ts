import { TestBed } from '@angular/core/testing';
import { MAT_DIALOG_DATA } from '@angular/material/dialog';
import { binLabels, type NumericBins } from '@tallystone/numeric/bench';
import { utilisation } from '../testing/characteristics';
import { StaleDialog, type StaleQuestion, type StaleSide } from './stale-dialog';

const before: NumericBins = { kind: 'numeric', edges: [18762.23], special: ['own'], missing: 'own' };
const side = (edge: number, by?: string): StaleSide => ({
  informationValue: 0.31,
  bins: binLabels(utilisation.fine, { ...before, edges: [edge] }),
  edits: [{ kind: 'cut moved', what: `Cut moved from 18762.23 to ${edge}`, before, by }],
});
const asked: StaleQuestion = {
  column: 'income',
  by: 'Colin',
  at: '2026-03-01T10:00:00Z',
  theirs: side(19000, 'Colin'),
  mine: side(20500),
};

describe('the dialog of theirs or mine', () => {
  it('has bins and edits with numbers as the axis has them', async () => {
    TestBed.configureTestingModule({ providers: [{ provide: MAT_DIALOG_DATA, useValue: asked }] });
    const fixture = TestBed.createComponent(StaleDialog);
    await fixture.whenStable();
    const items = (name: string): (string | undefined)[] =>
      [...(fixture.nativeElement as HTMLElement).querySelectorAll(`section[aria-label="${name}"] li`)].map((item) =>
        item.textContent?.trim(),
      );
    expect(items('Theirs: Colin')).toEqual([
      'under 19\u202F000',
      '19\u202F000 and over',
      'no bureau record',
      'missing',
      'Cut moved from 18\u202F762.23 to 19\u202F000 (Colin)',
    ]);
    expect(items('Mine').at(-1)).toBe('Cut moved from 18\u202F762.23 to 20\u202F500');
  });
});
