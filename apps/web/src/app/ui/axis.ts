import { Directive, ElementRef, effect, inject, input } from '@angular/core';
import { type Axis, type AxisDomain } from 'd3-axis';
import { select } from 'd3-selection';

/**
 * Draws a d3 axis in the product's manner on a <g>. `open` leaves the axis line out; `grid` (a length) draws hairlines across the
 * figure instead of ticks.
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

  constructor() {
    const element = inject<ElementRef<SVGGElement>>(ElementRef).nativeElement;
    effect(() => {
      const grid = this.grid();
      const axis = this.tsAxis().tickSizeOuter(0).tickPadding(7);
      if (grid !== null) axis.tickSizeInner(-grid);
      const g = select(element).call(axis);
      g.attr('font-family', null).attr('font-size', null);
    });
  }
}
