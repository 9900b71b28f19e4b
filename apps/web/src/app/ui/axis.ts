import { Directive, ElementRef, effect, inject, input } from '@angular/core';
import { type Axis, type AxisDomain } from 'd3-axis';
import { select } from 'd3-selection';

/** Width of a letter or a digit of a tick's label, rather too wide than too narrow. */
const letter = 7; // px

/**
 * Draws a d3 axis in the product's manner on a <g>. `open` leaves the axis line out; `grid` (a length) draws hairlines across the
 * figure instead of ticks; `within` (from, to) keeps the labels of a horizontal axis between two places, where they would be cut off or
 * run into what stands beside.
 *
 * @example <svg:g [tsAxis]="axisBottom(x).ticks(6)" [attr.transform]="'translate(0,' + height + ')'" />
 */
@Directive({
  selector: 'g[tsAxis]',
  host: { class: 'ts-axis', 'aria-hidden': 'true', '[class.ts-axis-open]': 'open()', '[class.ts-axis-grid]': 'grid() !== null' },
})
export class AxisDirective<Domain extends AxisDomain> {
  readonly tsAxis = input.required<Axis<Domain>>();
  readonly open = input(false);
  readonly grid = input<number | null>(null);
  readonly within = input<readonly [number, number] | null>(null);

  constructor() {
    const element = inject<ElementRef<SVGGElement>>(ElementRef).nativeElement;
    effect(() => {
      const grid = this.grid();
      const axis = this.tsAxis().tickSizeOuter(0).tickPadding(7);
      if (grid !== null) axis.tickSizeInner(-grid);
      const g = select(element).call(axis);
      g.attr('font-family', null).attr('font-size', null);
      const within = this.within();
      g.selectAll<SVGTextElement, Domain>('.tick text').attr('dx', function (value) {
        const half = ((this.textContent?.length ?? 0) * letter) / 2;
        return within && inside(axis.scale()(value) ?? 0, half, within);
      });
    });
  }
}

/** How far a label that is centred at x, so wide to either side, moves to stand within; null where it does already. */
function inside(x: number, half: number, [from, to]: readonly [number, number]): number | null {
  if (x + half > to) return to - half - x;
  return x - half < from ? from + half - x : null;
}
