import type { Sheet } from '../page/sheet';
import type { Box } from '../page/table';
import { fixed } from '../number-texts';
import { colour } from '../tokens';
import { linearScale, Plot, roundTicks, tickDecimals, type Scale } from './plot';

export interface Rung {
  goods: number;
  bads: number;
}

const z = 1.959963984540054;

/** Log odds good:bad of a bin with its 95 % interval (normal, on the log odds; a usual approximation); null where goods or bads are none. */
export function logOdds(rung: Rung | undefined): { value: number; lower: number; upper: number } | null {
  if (!rung || rung.goods <= 0 || rung.bads <= 0) return null;
  const value = Math.log(rung.goods / rung.bads);
  const reach = z * Math.sqrt(1 / rung.goods + 1 / rung.bads);
  return { value, lower: value - reach, upper: value + reach };
}

/** One rung per bin beside its row: bar development with interval, circle hold-out, diamond out-of-time. */
export class Ladder {
  private readonly from: number;
  private readonly to: number;

  constructor(
    private readonly sheet: Sheet,
    private readonly development: readonly Rung[],
    private readonly holdOut: readonly Rung[] | null,
    private readonly outOfTime: readonly Rung[] | null,
  ) {
    const bounds = development.flatMap((rung) => {
      const odds = logOdds(rung);
      return odds === null ? [] : [odds.lower, odds.upper];
    });
    const others = [...(holdOut ?? []), ...(outOfTime ?? [])].flatMap((rung) => logOdds(rung)?.value ?? []);
    const low = Math.min(...bounds, ...others);
    const high = Math.max(...bounds, ...others);
    // Wide intervals of tiny bins would press the rest together: they run off at the edge instead.
    this.from = Number.isFinite(low) ? Math.max(low, -4) : 0;
    this.to = Number.isFinite(high) ? Math.min(Math.max(high, this.from + 1), 8) : 1;
  }

  private scale(box: Box): Scale {
    const inner = linearScale(this.from, this.to, box.x + 4, box.x + box.width - 4);
    return (value) => Math.min(box.x + box.width - 1, Math.max(box.x + 1, inner(value)));
  }

  private ticks(): number[] {
    return roundTicks(this.from, this.to, 4);
  }

  row(index: number, box: Box): void {
    const plot = new Plot(this.sheet, box);
    const x = this.scale(box);
    const middle = box.y + Math.min(box.height / 2, 8.5);
    for (const tick of this.ticks())
      plot.line(
        [
          [x(tick), box.y],
          [x(tick), box.y + box.height],
        ],
        colour.hairline,
        0.4,
      );
    const odds = logOdds(this.development[index]);
    if (odds !== null) {
      plot.bar(x(odds.lower), middle - 4, x(odds.upper) - x(odds.lower), 8, colour.container);
      plot.bar(x(odds.value) - 1, middle - 5, 2, 10, colour.primary);
    }
    const held = logOdds(this.holdOut?.[index]);
    if (held !== null) plot.circle(x(held.value), middle, 2.4, colour.ink);
    const later = logOdds(this.outOfTime?.[index]);
    if (later !== null) plot.diamond(x(later.value), middle, 3.2, colour.ink2);
  }

  axis(box: Box): void {
    const plot = new Plot(this.sheet, box);
    const ticks = this.ticks();
    const x = this.scale(box);
    const decimals = tickDecimals(ticks);
    for (const tick of ticks) plot.label(fixed(tick, decimals), x(tick), box.y + 8, { align: 'centre' });
  }
}
