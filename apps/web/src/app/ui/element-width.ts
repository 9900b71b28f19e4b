import { DestroyRef, Directive, ElementRef, inject, output } from '@angular/core';

/**
 * Tells the width of its element in whole pixels, now and whenever it changes, so that a chart can be drawn to fit.
 *
 * @example <div (tsWidth)="width.set($event)"><svg [attr.width]="width()">…</svg></div>
 */
@Directive({ selector: '[tsWidth]' })
export class ElementWidth {
  readonly tsWidth = output<number>();

  constructor() {
    const element = inject<ElementRef<Element>>(ElementRef).nativeElement;
    if (typeof ResizeObserver === 'undefined') return;
    const observer = new ResizeObserver(([entry]) => this.tsWidth.emit(Math.floor(entry.contentRect.width)));
    observer.observe(element);
    inject(DestroyRef).onDestroy(() => observer.disconnect());
  }
}
