import type { Sheet } from '../page/sheet';
import type { Box } from '../page/table';
import { colour, type } from '../tokens';

export type Scale = (value: number) => number;

export function linearScale(from: number, to: number, start: number, end: number): Scale {
  const span = to - from || 1;
  return (value) => start + ((value - from) / span) * (end - start);
}

export function logScale(from: number, to: number, start: number, end: number): Scale {
  const inner = linearScale(Math.log(from), Math.log(to), start, end);
  return (value) => inner(Math.log(value));
}

/** Round values in [from, to], about as many as wanted, in steps of 1, 2 or 5 times a power of ten. */
export function roundTicks(from: number, to: number, wanted: number): number[] {
  const rough = (to - from) / Math.max(1, wanted);
  if (!(rough > 0)) return [from];
  const power = 10 ** Math.floor(Math.log10(rough));
  const step = [1, 2, 5, 10].map((factor) => factor * power).find((candidate) => candidate >= rough) ?? 10 * power;
  const first = Math.ceil(from / step - 1e-9);
  const last = Math.floor(to / step + 1e-9);
  return Array.from({ length: last - first + 1 }, (_, index) => (first + index) * step);
}

/** 1 and 3 times powers of ten in [from, to]. */
export function logTicks(from: number, to: number, factors: readonly number[] = [1, 3]): number[] {
  const ticks: number[] = [];
  for (let power = Math.floor(Math.log10(from)); power <= Math.ceil(Math.log10(to)); power += 1) {
    for (const factor of factors) {
      const tick = Number(`${factor}e${power}`);
      if (tick >= from * 0.999 && tick <= to * 1.001) ticks.push(tick);
    }
  }
  return ticks;
}

/** Decimals that a step of round ticks needs. */
export function tickDecimals(ticks: readonly number[]): number {
  const step = ticks.length > 1 ? Math.abs(ticks[1] - ticks[0]) : Math.abs(ticks[0] ?? 1);
  return step > 0 ? Math.min(6, Math.max(0, -Math.floor(Math.log10(step) + 1e-9))) : 0;
}

/** Pen for figures: everything in page coordinates. */
export class Plot {
  constructor(
    readonly sheet: Sheet,
    readonly box: Box,
  ) {}

  line(points: readonly (readonly [number, number])[], ink: string, weight = 1, dash = 0): void {
    if (points.length < 2) return;
    const { doc } = this.sheet;
    doc.save();
    points.forEach(([x, y], index) => (index === 0 ? doc.moveTo(x, y) : doc.lineTo(x, y)));
    doc.lineWidth(weight).lineJoin('round').strokeColor(ink);
    if (dash > 0) doc.dash(dash, { space: dash });
    doc.stroke();
    doc.restore();
  }

  area(points: readonly (readonly [number, number])[], ink: string): void {
    const { doc } = this.sheet;
    points.forEach(([x, y], index) => (index === 0 ? doc.moveTo(x, y) : doc.lineTo(x, y)));
    doc.closePath().fill(ink);
  }

  bar(x: number, y: number, width: number, height: number, ink: string): void {
    if (width > 0 && height > 0) this.sheet.doc.rect(x, y, width, height).fill(ink);
  }

  circle(x: number, y: number, radius: number, ink: string, filled = false): void {
    const { doc } = this.sheet;
    doc.circle(x, y, radius).lineWidth(1);
    if (filled) doc.fill(ink);
    else doc.fillAndStroke('#FFFFFF', ink);
  }

  diamond(x: number, y: number, reach: number, ink: string): void {
    const { doc } = this.sheet;
    doc
      .moveTo(x, y - reach)
      .lineTo(x + reach, y)
      .lineTo(x, y + reach)
      .lineTo(x - reach, y)
      .closePath()
      .lineWidth(1)
      .fillAndStroke('#FFFFFF', ink);
  }

  label(
    text: string,
    x: number,
    y: number,
    options: { align?: 'left' | 'right' | 'centre'; ink?: string; strong?: boolean; size?: number } = {},
  ): void {
    const { align = 'left', ink = colour.ink2, strong = false, size = type.axis.size } = options;
    const font = strong ? 'semibold' : 'regular';
    const own = this.sheet.measure.width(text, font, size);
    const start = align === 'right' ? x - own : align === 'centre' ? x - own / 2 : x;
    this.sheet.lineAt(text, start, y, { font, size, colour: ink });
  }

  /** Values at the left of a plot, each with a short line into it. */
  leftAxis(x: number, ticks: readonly number[], scale: Scale, text: (value: number) => string, grid: number | null = null): void {
    for (const tick of ticks) {
      const y = scale(tick);
      this.line(
        [
          [x, y],
          [grid ?? x + 3, y],
        ],
        colour.hairline,
        0.5,
      );
      this.label(text(tick), x - 5, y + 2.4, { align: 'right' });
    }
  }

  /** A rule with values under it; where they would touch, a value is left out. */
  bottomAxis(y: number, from: number, to: number, ticks: readonly number[], scale: Scale, text: (value: number) => string): void {
    this.line(
      [
        [from, y],
        [to, y],
      ],
      colour.ink,
      0.75,
    );
    let free = -Infinity;
    for (const tick of [...ticks].sort((first, second) => scale(first) - scale(second))) {
      const x = scale(tick);
      const shown = text(tick);
      const half = this.sheet.measure.width(shown, 'regular', type.axis.size) / 2;
      this.line(
        [
          [x, y],
          [x, y + 3],
        ],
        colour.ink,
        0.5,
      );
      if (x - half < free + 4) continue;
      this.label(shown, x, y + 11, { align: 'centre' });
      free = x + half;
    }
  }

  /** The movable notch of the product, standing still: a mark on top and a line through the figure. */
  notch(x: number, top: number, bottom: number, text: string): void {
    const { doc } = this.sheet;
    doc
      .moveTo(x - 4.5, top)
      .lineTo(x + 4.5, top)
      .lineTo(x + 4.5, top + 4)
      .lineTo(x, top + 9)
      .lineTo(x - 4.5, top + 4)
      .closePath()
      .fill(colour.ochre);
    this.line(
      [
        [x, top + 8],
        [x, bottom],
      ],
      colour.ochre,
      1,
    );
    const width = this.sheet.measure.width(text, 'semibold', type.axis.size + 0.5);
    const fitsRight = x + 8 + width <= this.box.x + this.box.width;
    this.label(text, fitsRight ? x + 8 : x - 8, top + 6, {
      align: fitsRight ? 'left' : 'right',
      ink: colour.ochreText,
      strong: true,
      size: type.axis.size + 0.5,
    });
  }
}
