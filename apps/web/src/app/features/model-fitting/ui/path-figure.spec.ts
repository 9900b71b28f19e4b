import { ChangeDetectionStrategy, Component, signal } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { smallPath } from '../testing/path';
import { PathFigure } from './path-figure';

@Component({ changeDetection: ChangeDetectionStrategy.OnPush, imports: [PathFigure], template: '<ts-path-figure [path]="path" [(index)]="index" />' })
class Host {
  readonly path = smallPath();
  readonly index = signal(2);
}

// jsdom lays nothing out: the figure is drawn at its first width.
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

describe('the three-part figure', () => {
  // Only where there is none, and only while these tests run: other specs share this window.
  beforeEach(() => vi.stubGlobal('ResizeObserver', globalThis.ResizeObserver ?? NoResize));
  afterEach(() => vi.unstubAllGlobals());

  const setUp = async () => {
    const fixture = TestBed.createComponent(Host);
    await fixture.whenStable();
    const root = fixture.nativeElement as HTMLElement;
    const slider = root.querySelector('[role=slider]') as SVGElement;
    const press = async (key: string) => {
      slider.dispatchEvent(new KeyboardEvent('keydown', { key, bubbles: true }));
      await fixture.whenStable();
    };
    return { host: fixture.componentInstance, root, slider, press };
  };

  it('moves its notch by keyboard and says where it stands', async () => {
    const { host, slider, press } = await setUp();
    expect(slider.getAttribute('aria-valuetext')).toContain('1 characteristic kept');
    await press('ArrowRight');
    expect(host.index()).toBe(3);
    expect(slider.getAttribute('aria-valuetext')).toContain('2 characteristics kept');
    await press('End');
    expect(host.index()).toBe(5);
    await press('ArrowRight');
    expect(host.index()).toBe(5);
    await press('1');
    expect(host.index()).toBe(2);
    await press('m');
    expect(host.index()).toBe(4);
    await press('Home');
    expect(host.index()).toBe(0);
  });

  it('inks the curves and tally rows that are kept under the notch', async () => {
    const { root, press } = await setUp();
    expect(root.querySelectorAll('path.coefficient.kept').length).toBe(1);
    await press('End');
    expect(root.querySelectorAll('path.coefficient.kept').length).toBe(3);
    expect(root.querySelectorAll('g.kept text.name').length).toBe(3);
  });

  it('has a tally row for each characteristic, named', async () => {
    const { root } = await setUp();
    expect([...root.querySelectorAll('text.name')].map((text) => text.textContent)).toEqual(['age', 'income', 'phone']);
  });
});
