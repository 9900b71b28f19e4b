import { ChangeDetectionStrategy, Component, signal } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { axisBottom } from 'd3-axis';
import { scaleLinear } from 'd3-scale';
import { AxisDirective } from './axis';

@Component({
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [AxisDirective],
  template: `<svg><svg:g [tsAxis]="axis()" [within]="within()" /></svg>`,
})
class Host {
  readonly axis = signal(axisBottom(scaleLinear([0, 20000], [100, 500])).tickValues([0, 10000, 20000]));
  readonly within = signal<readonly [number, number] | null>(null);
}

describe('the labels of an axis', () => {
  const shifts = async (within: readonly [number, number] | null): Promise<number[]> => {
    const fixture = TestBed.createComponent(Host);
    // As a figure does that becomes narrower: what stood within at first may not do so afterwards, and the other way round.
    for (const now of [[105, 495] as const, within]) {
      fixture.componentInstance.within.set(now);
      await fixture.whenStable();
    }
    const labels = [...(fixture.nativeElement as HTMLElement).querySelectorAll('.tick text')];
    expect(labels.map((label) => label.textContent)).toEqual(['0', '10,000', '20,000']);
    return labels.map((label) => Number(label.getAttribute('dx')));
  };

  it('stand under their ticks', async () => {
    expect(await shifts(null)).toEqual([0, 0, 0]);
    expect(await shifts([0, 600])).toEqual([0, 0, 0]);
  });

  it('move in where they would reach over an end, the first and the last, and no further than they must', async () => {
    const [first, middle, last] = await shifts([100, 505]);
    expect(middle).toBe(0);
    // A digit is some seven pixels wide.
    expect(first).toBeGreaterThan(2);
    expect(first).toBeLessThan(6);
    expect(last).toBeLessThan(-10);
    expect(last).toBeGreaterThan(-25);
  });
});
