import { ChangeDetectionStrategy, Component, computed, input, output, signal } from '@angular/core';
import { scaleLinear } from 'd3-scale';
import { type Column } from '../../../ui/column';
import { ElementWidth } from '../../../ui/element-width';
import { FigureFrame, FigurePoint, type FigureTable } from '../../../ui/figure-frame';
import { count, points } from '../../../ui/numbers';
import { type CountedScorecard, bandLabel, bandsFinding, cutOffLabel } from './scorecard-view';

interface Step {
  readonly from: number;
  readonly to: number;
  readonly goods: number;
  readonly bads: number;
}

/**
 * The distribution of scores, goods above and bads below one rule; the bands are notches in the rule, the cut-off is the notch that moves.
 * Areas on both sides are shares of their own kind, so that a rare outcome can be seen.
 */
@Component({
  selector: 'ts-score-figure',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [ElementWidth, FigureFrame, FigurePoint],
  templateUrl: './score-figure.html',
  styleUrl: './score-figure.scss',
})
export class ScoreFigure {
  readonly scorecard = input.required<CountedScorecard>();
  /** As it stands in the form; null while not stated. */
  readonly cutOff = input<number | null>(null);
  readonly movable = input(false);
  readonly cutOffChange = output<number>();

  protected readonly width = signal(780);
  private dragging = false;

  /** On a narrow screen what the notch says has a line of its own. */
  protected readonly narrow = computed(() => this.width() < 560);
  protected readonly layout = computed(() => {
    const head = this.narrow() ? 22 : 0;
    return { head, left: 8, right: Math.max(300, this.width()) - 8, top: head + 40, rule: head + 168, bottom: head + 296, height: head + 326 };
  });
  protected readonly finding = computed(() => bandsFinding(this.scorecard().bands));
  protected readonly steps = computed<Step[]>(() => {
    const { from, step, goods, bads } = this.scorecard().distribution;
    return goods.map((value, i) => ({ from: from + i * step, to: from + (i + 1) * step, goods: value, bads: bads[i] }));
  });
  private readonly x = computed(() => {
    const { from, step, goods } = this.scorecard().distribution;
    return scaleLinear()
      .domain([from, from + step * Math.max(1, goods.length)])
      .range([this.layout().left, this.layout().right]);
  });
  protected readonly bars = computed(() => {
    const steps = this.steps();
    const x = this.x();
    const { top, rule, bottom } = this.layout();
    const totals = { goods: sum(steps.map((step) => step.goods)) || 1, bads: sum(steps.map((step) => step.bads)) || 1 };
    const most = Math.max(...steps.map((step) => Math.max(step.goods / totals.goods, step.bads / totals.bads)), 1e-9);
    const reach = Math.min(rule - top - 10, bottom - rule - 14);
    return steps.map((step) => {
      const left = x(step.from) + 0.5;
      const right = x(step.to) - 0.5;
      return {
        ...step,
        left,
        width: Math.max(1, right - left),
        up: (reach * (step.goods / totals.goods)) / most,
        down: (reach * (step.bads / totals.bads)) / most,
        words: `${points(step.from)} to below ${points(step.to)}: ${count(step.goods)} goods, ${count(step.bads)} bads`,
      };
    });
  });
  /** The rule: a line with a notch at each edge of a band. */
  protected readonly rulePath = computed(() => {
    const { left, right, rule } = this.layout();
    const edges = this.edges().map(({ x }) => x);
    return `M${left} ${rule}${edges.map((at) => `H${at - 5}l5 8 5-8`).join('')}H${right}`;
  });
  protected readonly edges = computed(() => {
    const x = this.x();
    const { left, right } = this.layout();
    const [low, high] = x.domain();
    let last = -Infinity;
    return this.scorecard()
      .bands.flatMap(({ from }) => (from === null || from <= low || from >= high ? [] : [from]))
      .map((value) => {
        const at = x(value);
        const shown = at - last > 34 && at > left + 56 && at < right - 8; // left of that stands the name of the axis
        if (shown) last = at;
        return { value, x: at, text: shown ? points(value) : '' };
      });
  });
  protected readonly ends = computed(() => {
    const [low, high] = this.x().domain();
    return { low: points(low), high: points(high) };
  });
  protected readonly notch = computed(() => {
    const cutOff = this.cutOff();
    if (cutOff === null) return null;
    const [low, high] = this.x().domain();
    const at = this.x()(Math.min(high, Math.max(low, cutOff)));
    const label = cutOffLabel(this.scorecard().distribution, cutOff);
    const room = label.length * 6.6 + 16;
    const { left, right } = this.layout();
    if (this.narrow()) return { at, label, x: 0, anchor: 'start' };
    if (at + room < right) return { at, label, x: at + 13, anchor: 'start' };
    return at - room > left ? { at, label, x: at - 13, anchor: 'end' } : { at, label, x: left, anchor: 'start' };
  });
  protected readonly range = computed(() => {
    const [low, high] = this.x().domain();
    return { low, high };
  });
  protected readonly table = computed<FigureTable<Step>>(() => {
    const columns: Column<Step>[] = [
      { key: 'from', label: 'Score from', kind: 'points', value: (row) => row.from },
      { key: 'to', label: 'to below', kind: 'points', value: (row) => row.to },
      { key: 'goods', label: 'Goods', kind: 'count', value: (row) => row.goods },
      { key: 'bads', label: 'Bads', kind: 'count', value: (row) => row.bads },
    ];
    return { columns, rows: this.steps() };
  });
  protected readonly bandWords = computed(() => this.scorecard().bands.map(bandLabel).join(', '));

  protected grab(event: PointerEvent): void {
    if (!this.movable() || event.button !== 0) return;
    this.dragging = true;
    (event.currentTarget as SVGElement).setPointerCapture(event.pointerId);
    this.moveTo(event);
  }

  protected drag(event: PointerEvent): void {
    if (this.dragging) this.moveTo(event);
  }

  protected release(event: PointerEvent): void {
    this.dragging = false;
    (event.currentTarget as SVGElement).releasePointerCapture(event.pointerId);
  }

  /** Arrow keys go one step of the distribution on, Page keys five, Home and End to the ends. */
  protected press(event: KeyboardEvent): void {
    const cutOff = this.cutOff();
    if (!this.movable() || cutOff === null) return;
    const { step } = this.scorecard().distribution;
    const { low, high } = this.range();
    const to: Record<string, number> = {
      ArrowRight: cutOff + step,
      ArrowUp: cutOff + step,
      ArrowLeft: cutOff - step,
      ArrowDown: cutOff - step,
      PageUp: cutOff + 5 * step,
      PageDown: cutOff - 5 * step,
      Home: low,
      End: high,
    };
    const next = to[event.key];
    if (next === undefined || event.ctrlKey || event.metaKey || event.altKey) return;
    event.preventDefault();
    this.take(next);
  }

  private moveTo(event: PointerEvent): void {
    const svg = (event.currentTarget as SVGElement).closest('svg');
    if (svg) this.take(this.x().invert(event.clientX - svg.getBoundingClientRect().left));
  }

  /** The notch stands at a step of the distribution, where what it says is exact. */
  private take(value: number): void {
    const { from, step } = this.scorecard().distribution;
    const { low, high } = this.range();
    const next = Math.min(high, Math.max(low, from + Math.round((value - from) / step) * step));
    if (next !== this.cutOff()) this.cutOffChange.emit(next);
  }
}

const sum = (values: readonly number[]): number => values.reduce((total, value) => total + value, 0);
