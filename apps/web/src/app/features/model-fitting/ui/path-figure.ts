import {
  ChangeDetectionStrategy,
  Component,
  DestroyRef,
  type ElementRef,
  afterNextRender,
  computed,
  inject,
  input,
  model,
  signal,
  viewChild,
} from '@angular/core';
import type { FitPath } from '@tallystone/contracts/fits/schema';
import { extent } from 'd3-array';
import { scaleLinear, scaleLog } from 'd3-scale';
import { area, line } from 'd3-shape';
import { fixed, plural, significant } from '../../../ui/numbers';
import { entryOrder, nearestIndex, notchLabel, placeBeside, ruleAt } from './path-view';

const rowHeight = 18;
const perLetter = 6.7; // mean width of a letter of 13 px, in pixels
const levels = 4; // strengths of a tally stroke: enough to see growth, few enough paths to draw at once

/**
 * The three-part figure on one penalty axis: cross-validated deviance with its standard-error band, coefficients, and a tally with one
 * row of strokes per characteristic from the penalty at which it enters. One movable notch runs through all three. The penalty falls
 * from left to right, so that characteristics enter as one reads on.
 *
 * Everything that depends on the path alone is computed once; moving the notch changes one line, one label and which curves are inked.
 */
@Component({
  selector: 'ts-path-figure',
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './path-figure.html',
  styleUrl: './path-figure.scss',
})
export class PathFigure {
  readonly path = input.required<FitPath>();
  /** Where the notch stands: an index into the penalties. */
  readonly index = model.required<number>();

  private readonly box = viewChild.required<ElementRef<HTMLElement>>('box');
  protected readonly width = signal(800);
  protected readonly under = signal<number | null>(null);
  private dragging = false;

  protected readonly narrow = computed(() => this.width() < 560);
  protected readonly layout = computed(() => {
    const longest = Math.max(...this.path().characteristics.map(({ label }) => label.length));
    const left = Math.min(this.narrow() ? 136 : 190, Math.max(136, longest * perLetter + 18));
    const right = this.width() - 12;
    const deviance = { top: 34, bottom: this.narrow() ? 130 : 150 };
    const coefficients = { top: deviance.bottom + 38, bottom: deviance.bottom + (this.narrow() ? 198 : 248) };
    const tally = coefficients.bottom + 34;
    const axis = tally + this.path().characteristics.length * rowHeight + 4;
    return { left, right, deviance, coefficients, tally, axis, height: axis + 30 };
  });

  private readonly x = computed(() => {
    const { lambdas } = this.path();
    const first = lambdas[0];
    const last = lambdas[lambdas.length - 1];
    return scaleLog()
      .domain([first * 1.05, first === last ? last / 1.05 : last])
      .range([this.layout().left, this.layout().right]);
  });
  private readonly devianceScale = computed(() => {
    const { mean, standardError } = this.path().crossValidation;
    const low = Math.min(...mean.map((value, i) => value - standardError[i]));
    const high = Math.max(...mean.map((value, i) => value + standardError[i]));
    return scaleLinear()
      .domain(low === high ? [low - 0.01, high + 0.01] : [low, high])
      .nice(4)
      .range([this.layout().deviance.bottom, this.layout().deviance.top]);
  });
  private readonly coefficientScale = computed(() => {
    const [low = 0, high = 1] = extent(this.path().coefficients.flat());
    return scaleLinear()
      .domain([Math.min(0, low), Math.max(low === high ? 1 : 0, high)])
      .nice(5)
      .range([this.layout().coefficients.bottom, this.layout().coefficients.top]);
  });

  protected readonly devianceTicks = computed(() => {
    const scale = this.devianceScale();
    const ticks = scale.ticks(4);
    const decimals = Math.max(2, -Math.floor(Math.log10((ticks[1] ?? 1) - (ticks[0] ?? 0) || 1)));
    return ticks.map((value) => ({ value, y: scale(value), text: fixed(value, decimals) }));
  });
  protected readonly coefficientTicks = computed(() => {
    const scale = this.coefficientScale();
    return scale.ticks(5).map((value) => ({ value, y: scale(value), text: fixed(value, 2) }));
  });
  protected readonly penaltyTicks = computed(() => {
    const x = this.x();
    const ticks: { value: number; x: number; text: string }[] = [];
    let last = -Infinity;
    for (let power = 4; power >= -12; power -= 1) {
      for (const lead of [3, 1]) {
        const value = lead * 10 ** power;
        const at = x(value);
        if (at < this.layout().left - 0.5 || at > this.layout().right + 0.5 || at - last < 54) continue;
        ticks.push({ value, x: at, text: significant(value, 1) });
        last = at;
      }
    }
    return ticks;
  });

  protected readonly deviancePath = computed(() => {
    const { lambdas, crossValidation } = this.path();
    return line<number>((value, i) => this.x()(lambdas[i]), (value) => this.devianceScale()(value))([...crossValidation.mean]) ?? '';
  });
  protected readonly bandPath = computed(() => {
    const { lambdas, crossValidation } = this.path();
    const { mean, standardError } = crossValidation;
    return (
      area<number>(
        (_, i) => this.x()(lambdas[i]),
        (value, i) => this.devianceScale()(value - standardError[i]),
        (value, i) => this.devianceScale()(value + standardError[i]),
      )([...mean]) ?? ''
    );
  });
  protected readonly zero = computed(() => this.coefficientScale()(0));
  protected readonly lines = computed(() => {
    const { lambdas, coefficients, characteristics } = this.path();
    const x = this.x();
    const y = this.coefficientScale();
    return characteristics.map(({ column }, j) => ({
      j,
      column,
      d: line<number[]>((_, i) => x(lambdas[i]), (row) => y(row[j]))([...coefficients]) ?? '',
    }));
  });
  protected readonly tally = computed(() => {
    const path = this.path();
    const { lambdas, coefficients, characteristics } = path;
    const x = this.x();
    const reach = Math.floor((this.layout().left - 12) / perLetter);
    // Strokes closer than 4 px would run together: then only every second, third … penalty gets one.
    const apart = Math.max(1, Math.ceil((4 * lambdas.length) / (this.layout().right - this.layout().left)));
    return entryOrder(path).map((j, place) => {
      const y = this.layout().tally + place * rowHeight;
      const largest = Math.max(...coefficients.map((row) => Math.abs(row[j])));
      const parts = Array.from({ length: levels }, () => '');
      for (let i = 0; i < lambdas.length; i += apart) {
        const size = Math.abs(coefficients[i][j]);
        if (size === 0) continue;
        parts[Math.min(levels - 1, Math.floor((size / largest) * levels))] += `M${x(lambdas[i]).toFixed(1)} ${y - 5}v10`;
      }
      const { column, label } = characteristics[j];
      return {
        j,
        column,
        y,
        label: label.length > reach ? `${label.slice(0, reach - 1)}…` : label,
        strokes: parts.map((d, level) => ({ d, strength: 0.25 + (0.75 * (level + 1)) / levels })).filter((stroke) => stroke.d !== ''),
      };
    });
  });

  protected readonly kept = computed(() => {
    const row = this.path().coefficients[this.index()];
    return new Set(row.map((value, j) => (value === 0 ? -1 : j)).filter((j) => j >= 0));
  });
  protected readonly notchX = computed(() => this.x()(this.path().lambdas[this.index()]));
  protected readonly label = computed(() => notchLabel(this.path(), this.index()));
  protected readonly notchText = computed(() => {
    const x = this.notchX();
    const room = this.label().length * 7.2 + 16;
    return x + room > this.layout().right ? { x: x - 14, anchor: 'end' } : { x: x + 14, anchor: 'start' };
  });
  protected readonly ruleMarks = computed(() => {
    const path = this.path();
    const { minimum, oneStandardError } = path.crossValidation;
    const marks = [
      { rule: 'minimum', at: minimum, text: 'smallest deviance', line: 0 },
      { rule: 'one-standard-error', at: oneStandardError, text: 'one standard error', line: 1 },
    ];
    const here = ruleAt(path, this.index()) === null ? -1 : this.index();
    return marks
      .filter((mark, k) => mark.at !== here && !(k === 1 && minimum === oneStandardError))
      .map((mark) => {
        const x = this.x()(path.lambdas[mark.at]);
        return { ...mark, x, label: placeBeside(x, mark.text.length * perLetter, this.layout(), this.notchX()), textY: 32 + mark.line * 16 };
      });
  });
  protected readonly spoken = computed(() => {
    const path = this.path();
    const index = this.index();
    return `${notchLabel(path, index)}, ${plural(path.kept[index], 'characteristic')} kept, deviance ${fixed(path.crossValidation.mean[index], 4)}`;
  });

  constructor() {
    const destroyed = inject(DestroyRef);
    afterNextRender(() => {
      const observer = new ResizeObserver(([entry]) => this.width.set(Math.max(300, Math.floor(entry.contentRect.width))));
      observer.observe(this.box().nativeElement);
      destroyed.onDestroy(() => observer.disconnect());
    });
  }

  protected grab(event: PointerEvent): void {
    if (event.button !== 0) return;
    const svg = event.currentTarget as SVGSVGElement;
    const x = event.clientX - svg.getBoundingClientRect().left;
    if (x < this.layout().left - 20) return; // names are read, not dragged
    this.dragging = true;
    svg.setPointerCapture(event.pointerId);
    this.moveTo(x);
  }

  protected drag(event: PointerEvent): void {
    if (this.dragging) this.moveTo(event.clientX - (event.currentTarget as SVGSVGElement).getBoundingClientRect().left);
  }

  protected release(event: PointerEvent): void {
    this.dragging = false;
    (event.currentTarget as SVGSVGElement).releasePointerCapture(event.pointerId);
  }

  /** Arrow keys go one penalty on, Page keys ten, Home and End to the ends, "1" to the one-standard-error rule, "m" to the minimum. */
  protected step(event: KeyboardEvent): void {
    const last = this.path().lambdas.length - 1;
    const { minimum, oneStandardError } = this.path().crossValidation;
    const by: Record<string, number> = {
      ArrowRight: this.index() + 1,
      ArrowUp: this.index() + 1,
      ArrowLeft: this.index() - 1,
      ArrowDown: this.index() - 1,
      PageUp: this.index() + 10,
      PageDown: this.index() - 10,
      Home: 0,
      End: last,
      '1': oneStandardError,
      m: minimum,
    };
    const next = by[event.key];
    if (next === undefined || event.ctrlKey || event.metaKey || event.altKey) return;
    event.preventDefault();
    event.stopPropagation();
    this.index.set(Math.min(last, Math.max(0, next)));
  }

  private moveTo(x: number): void {
    const next = nearestIndex(this.path().lambdas, this.x().invert(x));
    if (next !== this.index()) this.index.set(next);
  }
}
