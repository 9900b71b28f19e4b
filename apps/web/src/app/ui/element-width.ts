import { ApplicationRef, DOCUMENT, DestroyRef, Directive, ElementRef, inject, output } from '@angular/core';

/** Pixels between the margins of a sheet of A4 (styles.scss): what is drawn wider would be made smaller, its words with it. */
const sheet = 680;

/**
 * Tells the width of its element in whole pixels, now and whenever it changes, so that a chart can be drawn to fit; while the page is printed, no more
 * than a sheet is wide.
 *
 * @example <div (tsWidth)="width.set($event)"><svg [attr.width]="width()">…</svg></div>
 */
@Directive({ selector: '[tsWidth]' })
export class ElementWidth {
  readonly tsWidth = output<number>();

  constructor() {
    const element = inject<ElementRef<Element>>(ElementRef).nativeElement;
    const application = inject(ApplicationRef);
    const window = inject(DOCUMENT).defaultView;
    if (typeof ResizeObserver === 'undefined') return;
    let width = 0;
    const observer = new ResizeObserver(([entry]) => {
      width = Math.floor(entry.contentRect.width);
      this.tsWidth.emit(width);
    });
    observer.observe(element);
    // The sheet is laid out as soon as the event has been told: nothing drawn later is on it.
    const toSheet = (): void => {
      if (width > sheet) this.tsWidth.emit(sheet);
      application.tick();
    };
    const toScreen = (): void => this.tsWidth.emit(width);
    window?.addEventListener('beforeprint', toSheet);
    window?.addEventListener('afterprint', toScreen);
    inject(DestroyRef).onDestroy(() => {
      observer.disconnect();
      window?.removeEventListener('beforeprint', toSheet);
      window?.removeEventListener('afterprint', toScreen);
    });
  }
}
