import { TestBed } from '@angular/core/testing';
import { CorrelationFigure } from './correlation-figure';
import { readCorrelations } from './correlation-reading';

class NoResize {
  observe(): void {
    /* never resized */
  }
  unobserve(): void {
    /* never observed */
  }
  disconnect(): void {
    /* nothing to stop */
  }
}

describe('the figure of correlations', () => {
  beforeEach(() => vi.stubGlobal('ResizeObserver', globalThis.ResizeObserver ?? NoResize));
  afterEach(() => vi.unstubAllGlobals());

  /** Neighbours correlate by 0.8, others less the further they are apart. */
  const setUp = async (size: number) => {
    const characteristics = Array.from({ length: size }, (_, place) => ({
      id: `${place}`,
      column: `column_${place}`,
      informationValue: 0.1 + place / 1000,
      inflation: 1,
      collinear: false,
    }));
    const matrix = characteristics.map((_, j) => characteristics.map((__, k) => 0.8 ** Math.abs(j - k)));
    const correlations = { characteristics, matrix };
    const fixture = TestBed.createComponent(CorrelationFigure);
    fixture.componentRef.setInput('correlations', correlations);
    fixture.componentRef.setInput('reading', readCorrelations(correlations, 0.75));
    await fixture.whenStable();
    const root = fixture.nativeElement as HTMLElement;
    const cell = () => root.querySelector('.cell') as SVGElement;
    const press = async (key: string): Promise<string | null> => {
      cell().dispatchEvent(new KeyboardEvent('keydown', { key, bubbles: true, cancelable: true }));
      await fixture.whenStable();
      return cell().getAttribute('aria-label');
    };
    const labels = () => [...root.querySelectorAll('text.ts-label')];
    return { root, press, cell, labels };
  };

  it('names every row of a few', async () => {
    const { labels } = await setUp(6);
    expect(labels()).toHaveLength(6);
  });

  it('names some of many, and always the row that is looked at', async () => {
    const { labels, press, root } = await setUp(80);
    expect(labels().length).toBeGreaterThan(20);
    expect(labels().length).toBeLessThan(80);
    for (let step = 0; step < 7; step++) {
      const said = await press('ArrowDown');
      const row = said?.match(/and (column_\d+):/)?.[1];
      expect(labels().map((label) => label.textContent?.trim())).toContain(row);
      expect(root.querySelector('text.looked')?.textContent?.trim()).toBe(row);
    }
    const places = labels()
      .map((label) => Number(label.getAttribute('y')))
      .sort((a, b) => a - b);
    for (let index = 1; index < places.length; index++) expect(places[index] - places[index - 1]).toBeGreaterThanOrEqual(14.9);
  });

  it('goes over all cells by keys, and over the marked ones by page', async () => {
    const { press, cell, root } = await setUp(5);
    const start = cell().getAttribute('aria-label');
    expect(start).toMatch(/0\.80$/);
    const seen = new Set([start]);
    for (let row = 0; row < 5; row++) {
      seen.add(await press('Home'));
      for (let column = 0; column < 5; column++) seen.add(await press('ArrowRight'));
      await press('Home');
      seen.add(await press('ArrowDown'));
    }
    // Ten pairs of five.
    expect(seen.size).toBe(10);
    expect(root.querySelector('[aria-live]')?.textContent).toBe(cell().getAttribute('aria-label'));
    for (let row = 0; row < 5; row++) await press('ArrowUp');
    await press('Home');
    const marked = new Set<string | null>();
    for (let step = 0; step < 6; step++) marked.add(await press('PageDown'));
    expect([...marked].every((label) => label?.endsWith('0.80'))).toBe(true);
    expect(marked.size).toBeGreaterThanOrEqual(3);
    const last = cell().getAttribute('aria-label');
    expect(await press('PageDown')).toBe(last);
    expect(await press('PageUp')).not.toBe(last);
  });
});
