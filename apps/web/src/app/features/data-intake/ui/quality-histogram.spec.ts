import { TestBed } from '@angular/core/testing';
import { QualityHistogram } from './quality-histogram';

describe('values by outcome', () => {
  it('draws goods above and bads below at one scale, and says how the bad rate differs', async () => {
    const fixture = TestBed.createComponent(QualityHistogram);
    fixture.componentRef.setInput('histogram', { edges: [0, 10, 20], goods: [90, 45], bads: [10, 15], unknown: [3, 0] });
    fixture.detectChanges();
    await fixture.whenStable();
    const host = fixture.nativeElement as HTMLElement;
    const heights = (kind: string): number[] => [...host.querySelectorAll(`rect.${kind}`)].map((rect) => Number(rect.getAttribute('height')));
    const [goods, bads] = [heights('good'), heights('bad')];
    expect(goods[0] / goods[1]).toBeCloseTo(2, 9);
    expect(goods[0] / bads[0]).toBeCloseTo(9, 9);
    expect(bads[1] / bads[0]).toBeCloseTo(1.5, 9);
    expect(host.textContent).toContain('Bad rate 10.0\u202f% below 10, 25.0\u202f% from there on');
    expect(host.querySelector('[aria-label^="0 to 10: 90 goods, 10 bads"]')).not.toBeNull();
  });

  it('says nothing of rates from a few rows', () => {
    const fixture = TestBed.createComponent(QualityHistogram);
    fixture.componentRef.setInput('histogram', { edges: [0, 1, 2], goods: [9, 9], bads: [1, 0], unknown: [0, 0] });
    fixture.detectChanges();
    expect((fixture.nativeElement as HTMLElement).textContent).toContain('the outermost bars hold what lies beyond');
  });
});
