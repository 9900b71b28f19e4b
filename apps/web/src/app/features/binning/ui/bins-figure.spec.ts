import { ChangeDetectionStrategy, Component, computed, signal } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { readBench, type Bins, type EditOf } from '@tallystone/numeric/bench';
import type { MakeEdit } from '../bench/history';
import { home, utilisation } from '../testing/characteristics';
import { BinsFigure } from './bins-figure';
import type { AxisMode } from './geometry';

@Component({
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [BinsFigure],
  template: `<ts-bins-figure
    title="Bins"
    [fine]="of().fine"
    [bins]="bins()"
    [reading]="reading()"
    [editable]="editable()"
    [mode]="mode()"
    [(cut)]="cut"
    [(bin)]="bin"
    [(chosen)]="chosen"
    (previewed)="previews.push($event)"
    (edited)="take($event)"
    (typing)="typed = typed + 1"
  />`,
})
class Host {
  readonly of = signal(utilisation);
  readonly bins = signal<Bins>(utilisation.current);
  readonly reading = computed(() => readBench(this.of().fine, this.bins()));
  readonly editable = signal(true);
  readonly mode = signal<AxisMode>('value');
  readonly cut = signal<number | null>(null);
  readonly bin = signal<number | null>(null);
  readonly chosen = signal<ReadonlySet<string>>(new Set());
  readonly previews: (Bins | null)[] = [];
  readonly edits: EditOf<Bins>[] = [];
  typed = 0;

  take(make: MakeEdit): void {
    const edit = make(this.of().fine, this.bins());
    if (!edit) return;
    this.edits.push(edit);
    this.bins.set(edit.bins);
  }
}

// jsdom lays nothing out and knows no pointer capture: the figure is drawn at its first width.
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

describe('the binning figure', () => {
  beforeEach(() => {
    vi.stubGlobal('ResizeObserver', globalThis.ResizeObserver ?? NoResize);
    Element.prototype.setPointerCapture ??= () => undefined;
  });
  afterEach(() => vi.unstubAllGlobals());

  const setUp = async (characteristic = utilisation) => {
    const fixture = TestBed.createComponent(Host);
    fixture.componentInstance.of.set(characteristic);
    fixture.componentInstance.bins.set(characteristic.current);
    await fixture.whenStable();
    const root = fixture.nativeElement as HTMLElement;
    const press = async (element: Element, key: string) => {
      element.dispatchEvent(new KeyboardEvent('keydown', { key, bubbles: true, cancelable: true }));
      await fixture.whenStable();
    };
    return { host: fixture.componentInstance, fixture, root, press, cuts: () => [...root.querySelectorAll('[role=slider]')] };
  };

  it('moves a cut by keys to the next fine edge and no further than its neighbours', async () => {
    const { host, press, cuts } = await setUp();
    expect(cuts().map((cut) => cut.getAttribute('aria-valuenow'))).toEqual(['20', '40']);
    await press(cuts()[0], 'ArrowRight');
    expect(host.edits.at(-1)).toMatchObject({ kind: 'cut moved', what: 'Cut moved from 20 to 30' });
    expect(cuts()[0].getAttribute('aria-valuenow')).toBe('30');
    await press(cuts()[0], 'ArrowRight');
    expect(host.edits).toHaveLength(1);
    await press(cuts()[0], 'Home');
    expect(cuts()[0].getAttribute('aria-valuenow')).toBe('10');
    await press(cuts()[1], 'PageUp');
    expect(cuts()[1].getAttribute('aria-valuenow')).toBe('90');
    await press(cuts()[1], 'PageDown');
    expect(cuts()[1].getAttribute('aria-valuenow')).toBe('40');
    expect(cuts()[1].getAttribute('aria-valuetext')).toMatch(/^40; bad rate .* below, .* from there on; IV /);
  });

  it('edits the bins as they are when keys come faster than it is drawn', async () => {
    const { host, cuts, fixture } = await setUp();
    const [cut] = cuts();
    for (const key of ['ArrowRight', 'ArrowLeft', 'ArrowLeft'])
      cut.dispatchEvent(new KeyboardEvent('keydown', { key, bubbles: true, cancelable: true }));
    expect(cut.getAttribute('aria-valuenow')).toBe('20');
    await fixture.whenStable();
    expect(host.edits.map(({ what }) => what)).toEqual([
      'Cut moved from 20 to 30',
      'Cut moved from 30 to 20',
      'Cut moved from 20 to 10',
    ]);
    expect(cut.getAttribute('aria-valuenow')).toBe('10');
  });

  it('sends a category to the group that is seen, whatever its number has become', async () => {
    const { host, root, fixture } = await setUp(home);
    const press = (name: string, key: string) =>
      root
        .querySelector(`[data-category="${name}"]`)!
        .dispatchEvent(new KeyboardEvent('keydown', { key, bubbles: true, cancelable: true }));
    // Apart from rent, parents have a group of their own before it: the last of three groups is now the last of four.
    press('parents', 'n');
    press('rent', '3');
    await fixture.whenStable();
    expect(host.bins()).toMatchObject({ groups: [['owner'], ['parents'], ['rent', 'other']] });
  });

  it('takes a cut out with Delete and asks for a value on Enter', async () => {
    const { host, press, cuts } = await setUp();
    await press(cuts()[1], 'Enter');
    expect([host.typed, host.cut()]).toEqual([1, 1]);
    await press(cuts()[0], 'Delete');
    expect(host.edits.at(-1)).toMatchObject({ kind: 'bins merged', bins: { edges: [40] } });
    expect(cuts()).toHaveLength(1);
  });

  it('leaves the focus to a cut beside one that is taken out, and to the figure after the last', async () => {
    const { root, fixture, press, cuts } = await setUp();
    document.body.append(root);
    (cuts()[1] as SVGElement).focus();
    await press(cuts()[1], 'Delete');
    await fixture.whenStable();
    expect(cuts()).toHaveLength(1);
    expect(document.activeElement).toBe(cuts()[0]);
    await press(cuts()[0], 'Delete');
    await fixture.whenStable();
    expect(cuts()).toHaveLength(0);
    expect(document.activeElement?.tagName.toLowerCase()).toBe('svg');
    root.remove();
  });

  it('has ticks of values under the cuts, and none where classes stand side by side', async () => {
    const { host, root, fixture } = await setUp();
    const ticks = () => [...root.querySelectorAll('.ts-axis:not(.ts-axis-open) .tick')].map((tick) => tick.textContent?.trim());
    expect(ticks()).toContain('20');
    expect(ticks().length).toBeGreaterThan(3);
    host.mode.set('rows');
    await fixture.whenStable();
    expect(ticks()).toEqual([]);
  });

  it('shows the labels of all values whole, at both ends of the axis', async () => {
    // Nobody has a special code or no value, so that the axis goes on to the edge of the drawing, where its last tick stands.
    const values = Array.from({ length: 15 }, (_, place) => (place + 1) * 1000);
    const counts = (many: number): number[] => [...Array<number>(values.length + 1).fill(many), 0];
    const amounts: typeof utilisation = {
      ...utilisation,
      current: { kind: 'numeric', edges: [4000, 9000], special: [], missing: 'own' },
      fine: {
        ...utilisation.fine,
        edges: values,
        range: [0, 16000],
        special: [],
        development: { rows: counts(100), goods: counts(80), bads: counts(20) },
        holdOut: { rows: counts(50), goods: counts(40), bads: counts(10) },
      },
    };
    const { root } = await setUp(amounts);
    const width = Number(root.querySelector('svg[viewBox^="0 0"]')?.getAttribute('width'));
    const ticks = [...root.querySelectorAll('.ts-axis:not(.ts-axis-open) .tick')].map((tick) => {
      const text = tick.querySelector('text');
      const x = Number(/translate\(([\d.]+)/.exec(tick.getAttribute('transform') ?? '')?.[1]);
      // Centred under its tick but for what it is moved by; a digit is 6.6 pixels wide.
      const [centre, half] = [x + Number(text?.getAttribute('dx')), ((text?.textContent ?? '').length * 6.6) / 2];
      return { label: text?.textContent, x, from: centre - half, to: centre + half };
    });
    expect(ticks[0].label).toBe('0');
    expect(ticks.at(-1)?.label).toBe('16\u202F000');
    // It would not fit where it stands.
    expect(ticks.at(-1)!.x + 15).toBeGreaterThan(width);
    for (const { from, to } of ticks) {
      expect(from).toBeGreaterThanOrEqual(0);
      expect(to).toBeLessThanOrEqual(width);
    }
  });

  it('has rows, goods and bads of each bin under it', async () => {
    const { root } = await setUp();
    const row = (name: string) => {
      const line = [...root.querySelectorAll('ts-bins-table tbody tr')].find(
        (one) => one.querySelector('th')?.textContent?.trim() === name,
      );
      return [...(line?.querySelectorAll('td') ?? [])].map((cell) => cell.textContent?.trim()).filter((text) => text !== '');
    };
    expect(row('Rows')).toEqual(['200', '200', '600', '80', '60']);
    expect(row('Goods')).toEqual(['189', '180', '465', '60', '50']);
    expect(row('Bads')).toEqual(['11', '20', '135', '20', '10']);
  });

  it('drags a cut: shows where it would lie and edits once when it is let go', async () => {
    const { host, root, fixture, cuts } = await setUp();
    const svg = root.querySelector('svg[viewBox^="0 0"]') as SVGSVGElement;
    const width = Number(svg.getAttribute('width'));
    svg.getBoundingClientRect = () => ({ left: 0, width, top: 0, height: 100 }) as DOMRect;
    const line = (cut: Element): number => Number(cut.querySelector('line')?.getAttribute('x1'));
    const [from, to] = cuts().map(line);
    const pointer = (type: string, x: number) =>
      cuts()[0].dispatchEvent(Object.assign(new MouseEvent(type, { clientX: x, button: 0, bubbles: true }), { pointerId: 1 }));
    pointer('pointerdown', from);
    pointer('pointermove', (from + to) / 2);
    await fixture.whenStable();
    expect(host.previews.at(-1)).toMatchObject({ edges: [30, 40] });
    expect(host.edits).toHaveLength(0);
    pointer('pointermove', to + 200);
    expect(host.previews.at(-1)).toMatchObject({ edges: [30, 40] });
    pointer('pointerup', (from + to) / 2);
    await fixture.whenStable();
    expect(host.previews.at(-1)).toBeNull();
    expect(host.edits).toMatchObject([{ what: 'Cut moved from 20 to 30' }]);
  });

  describe('a cut among fine edges that lie close together', () => {
    // By value, over a scale of 0 to 100: 50 is the one round number among unround ones.
    const edges = [10, 20, 30, 40, 47.6, 48.8, 50, 51.2, 52.4, 70, 90];
    const dense = (values: readonly number[], many: number): number[] => [
      ...Array<number>(edges.length + 1).fill(many),
      ...values,
    ];
    const close: typeof utilisation = {
      ...utilisation,
      current: { kind: 'numeric', edges: [20, 48.8], special: ['own'], missing: 'own' },
      fine: {
        ...utilisation.fine,
        edges,
        development: { rows: dense([80, 60], 100), goods: dense([60, 50], 80), bads: dense([20, 10], 20) },
        holdOut: { rows: dense([40, 30], 50), goods: dense([30, 25], 40), bads: dense([10, 5], 10) },
      },
    };
    const grip = async () => {
      const { host, root, fixture, cuts } = await setUp(close);
      const svg = root.querySelector('svg[viewBox^="0 0"]') as SVGSVGElement;
      svg.getBoundingClientRect = () => ({ left: 0, width: Number(svg.getAttribute('width')), top: 0, height: 100 }) as DOMRect;
      const x = (cut: number): number => Number(cuts()[cut].querySelector('line')?.getAttribute('x1'));
      const start = x(1);
      // Pixels of one unit of the value, from the two cuts that are drawn.
      const unit = (start - x(0)) / 28.8;
      const pointer = async (type: string, away: number, altKey = false) => {
        const event = new MouseEvent(type, { clientX: start + away, button: 0, bubbles: true, altKey });
        cuts()[1].dispatchEvent(Object.assign(event, { pointerId: 1 }));
        await fixture.whenStable();
      };
      return { host, pointer, unit };
    };

    it('does not move when it is only pressed, wherever in its grip', async () => {
      const { host, pointer, unit } = await grip();
      // 50 would be within reach of a cut that snaps.
      expect(1.2 * unit).toBeLessThan(10);
      for (const [down, up] of [
        [0, 0],
        [9, 9],
        [0, 3],
      ]) {
        await pointer('pointerdown', down);
        await pointer('pointermove', up);
        await pointer('pointerup', up);
      }
      expect(host.edits).toEqual([]);
      expect(host.previews).toEqual([]);
      expect(host.cut()).toBe(1);
    });

    it('stays where it began when it is dragged away and back', async () => {
      const { host, pointer } = await grip();
      await pointer('pointerdown', 0);
      await pointer('pointermove', 80);
      await pointer('pointermove', 6);
      expect(host.previews.at(-1)).toEqual(close.current);
      await pointer('pointerup', 6);
      expect(host.edits).toEqual([]);
      expect(host.previews.at(-1)).toBeNull();
    });

    it('goes to a round number within reach', async () => {
      const { host, pointer, unit } = await grip();
      await pointer('pointerdown', 0);
      await pointer('pointermove', 80);
      // Nearer to 51.2 than to 50.
      await pointer('pointerup', 2 * unit);
      expect(host.edits).toMatchObject([{ what: 'Cut moved from 48.8 to 50' }]);
    });

    it('goes to the nearest fine edge with Alt', async () => {
      const { host, pointer, unit } = await grip();
      await pointer('pointerdown', 0);
      await pointer('pointermove', 80, true);
      await pointer('pointerup', 2 * unit, true);
      expect(host.edits).toMatchObject([{ what: 'Cut moved from 48.8 to 51.2' }]);
    });
  });

  it('changes nothing for those who only read', async () => {
    const { host, fixture, press, cuts } = await setUp();
    host.editable.set(false);
    await fixture.whenStable();
    await press(cuts()[0], 'ArrowRight');
    await press(cuts()[0], 'Delete');
    expect(host.edits).toEqual([]);
    expect(cuts()[0].getAttribute('aria-readonly')).toBe('true');
  });

  it('selects a bin by its head, aligned under it', async () => {
    const { host, root, fixture } = await setUp();
    const heads = [...root.querySelectorAll<HTMLButtonElement>('ts-bins-table thead button')];
    expect(heads.map((head) => head.textContent?.trim())).toEqual([
      'under 20',
      '20 to under 40',
      '40 and over',
      'no bureau record',
      'missing',
    ]);
    heads[1].click();
    await fixture.whenStable();
    expect(host.bin()).toBe(1);
    expect(heads[1].getAttribute('aria-pressed')).toBe('true');
  });

  it('groups categories by keys: chosen with space, sent to a group by its number, apart with n', async () => {
    const { host, root, press } = await setUp(home);
    const category = (name: string) => root.querySelector(`[data-category="${name}"]`) as SVGElement;
    expect([...root.querySelectorAll('[data-category]')].map((one) => one.getAttribute('data-category'))).toEqual([
      'owner',
      'parents',
      'rent',
      'other',
    ]);
    await press(category('parents'), ' ');
    expect(category('parents').getAttribute('aria-checked')).toBe('true');
    await press(category('parents'), '1');
    expect(host.edits.at(-1)).toMatchObject({
      kind: 'categories grouped',
      bins: { groups: [['owner', 'parents'], ['rent'], ['other']] },
    });
    await press(category('owner'), 'n');
    expect(host.edits.at(-1)).toMatchObject({
      kind: 'category set apart',
      bins: { groups: [['owner'], ['parents'], ['rent'], ['other']] },
    });
  });

  it('groups categories by dragging them onto a group', async () => {
    const { host, root, fixture } = await setUp(home);
    const svg = root.querySelector('svg[viewBox^="0 0"]') as SVGSVGElement;
    const width = Number(svg.getAttribute('width'));
    svg.getBoundingClientRect = () => ({ left: 0, width, top: 0, height: 100 }) as DOMRect;
    const category = (name: string) => root.querySelector(`[data-category="${name}"]`) as SVGElement;
    const x = (name: string): number => Number(category(name).querySelector('text')?.getAttribute('x'));
    const pointer = (type: string, at: number) =>
      category('other').dispatchEvent(
        Object.assign(new MouseEvent(type, { clientX: at, button: 0, bubbles: true }), { pointerId: 1 }),
      );
    pointer('pointerdown', x('other'));
    pointer('pointermove', x('owner'));
    pointer('pointerup', x('owner'));
    await fixture.whenStable();
    expect(host.edits).toMatchObject([
      {
        kind: 'categories grouped',
        bins: {
          groups: [
            ['owner', 'other'],
            ['rent', 'parents'],
          ],
        },
      },
    ]);
  });

  const dragging = async () => {
    const { host, root, fixture, press } = await setUp(home);
    const svg = root.querySelector('svg[viewBox^="0 0"]') as SVGSVGElement;
    const width = Number(svg.getAttribute('width'));
    svg.getBoundingClientRect = () => ({ left: 0, width, top: 0, height: 100 }) as DOMRect;
    const category = (name: string) => root.querySelector(`[data-category="${name}"]`) as SVGElement;
    const pointer = async (type: string, name: string, clientX: number, clientY = 0) => {
      const event = new MouseEvent(type, { clientX, clientY, button: 0, bubbles: true });
      category(name).dispatchEvent(Object.assign(event, { pointerId: 1 }));
      await fixture.whenStable();
    };
    const x = (name: string): number => Number(category(name).querySelector('text')?.getAttribute('x'));
    return { host, root, press, category, pointer, x };
  };

  it('makes a new group of what is dragged into the empty space, and none of what is put on missing', async () => {
    const { host, root, pointer, x } = await dragging();
    await pointer('pointerdown', 'parents', x('parents'));
    await pointer('pointermove', 'parents', 20);
    expect(root.querySelector('.apart.over')).not.toBeNull();
    expect(root.querySelector('svg')?.parentElement?.textContent).toContain('New group');
    await pointer('pointerup', 'parents', 20);
    expect(root.querySelector('.apart')).toBeNull();
    expect(host.edits).toMatchObject([
      { kind: 'category set apart', bins: { groups: [['owner'], ['parents'], ['rent'], ['other']] } },
    ]);
    const width = Number(root.querySelector('svg[viewBox^="0 0"]')?.getAttribute('width'));
    await pointer('pointerdown', 'other', x('other'));
    await pointer('pointermove', 'other', width - 40);
    await pointer('pointerup', 'other', width - 40);
    expect(host.edits).toHaveLength(1);
  });

  it('keeps the place for a new group in sight of a figure that is scrolled, and no group that is out of sight takes anything', async () => {
    const { host, root, category, pointer } = await dragging();
    const svg = root.querySelector('svg[viewBox^="0 0"]') as SVGSVGElement;
    const width = Number(svg.getAttribute('width'));
    // The frame shows 400 pixels from 200 on; the drawing begins 250 before that.
    const frame = svg.closest<HTMLElement>('.chart')!;
    frame.style.overflowX = 'auto';
    Object.defineProperties(frame, { scrollWidth: { value: width }, clientWidth: { value: 400 } });
    frame.scrollLeft = 250;
    frame.getBoundingClientRect = () => ({ left: 200, right: 600, top: 0, bottom: 600, width: 400 }) as DOMRect;
    svg.getBoundingClientRect = () => ({ left: -50, width, top: 0, height: 600 }) as DOMRect;
    const start = Number(category('other').querySelector('text')?.getAttribute('x')) - 50;
    await pointer('pointerdown', 'other', start);
    await pointer('pointermove', 'other', 400);
    const place = () => root.querySelector('.apart')!;
    const at = (name: string): number => Number(place().getAttribute(name));
    expect([at('x') - 250, at('x') - 250 + at('width')]).toEqual([1, 101]);
    // Beyond the frame lies the group of owners, which cannot be seen.
    await pointer('pointermove', 'other', 150);
    expect(place().classList).not.toContain('over');
    await pointer('pointerup', 'other', 150);
    expect(host.edits).toEqual([]);
    // Above the place for a new group the groups behind it can be reached.
    await pointer('pointerdown', 'parents', 300);
    await pointer('pointermove', 'parents', 240);
    expect(place().classList).not.toContain('over');
    await pointer('pointermove', 'parents', 240, at('y') + 10);
    expect(place().classList).toContain('over');
    await pointer('pointerup', 'parents', 240, at('y') + 10);
    expect(host.edits).toMatchObject([
      { kind: 'category set apart', bins: { groups: [['owner'], ['parents'], ['rent'], ['other']] } },
    ]);
  });

  it('lets go of categories with Escape: what is dragged first, then what is chosen', async () => {
    const { host, press, category, pointer, x } = await dragging();
    await press(category('rent'), ' ');
    expect([...host.chosen()]).toEqual(['rent']);
    await pointer('pointerdown', 'other', x('other'));
    await pointer('pointermove', 'other', x('owner'));
    await press(category('other'), 'Escape');
    await pointer('pointerup', 'other', x('owner'));
    expect(host.edits).toEqual([]);
    expect([...host.chosen()]).toEqual(['rent']);
    await press(category('rent'), 'Escape');
    expect(host.chosen().size).toBe(0);
  });

  it('says the number of each group above it', async () => {
    const { root } = await setUp(home);
    const numbers = [...root.querySelectorAll('.group-number')];
    expect(numbers.map((one) => one.textContent?.trim())).toEqual(['1', '2', '3']);
    const places = numbers.map((one) => Number(one.getAttribute('x')));
    const owner = Number(root.querySelector('[data-category="owner"] text')?.getAttribute('x'));
    expect(places[0]).toBeCloseTo(owner, 6);
    expect(places).toEqual([...places].sort((a, b) => a - b));
  });

  it('has a point for every mark of every partition, and none of out-of-time while it is covered', async () => {
    const { root } = await setUp();
    const labels = [...root.querySelectorAll('.ts-point')].map((point) => point.getAttribute('aria-label'));
    expect(labels.filter((label) => label?.startsWith('Development'))).toHaveLength(5);
    expect(labels.filter((label) => label?.startsWith('Hold-out'))).toHaveLength(5);
    expect(labels.some((label) => label?.startsWith('Out-of-time'))).toBe(false);
  });
});
