import { DOCUMENT } from '@angular/common';
import { Injectable, Injector, afterNextRender, inject } from '@angular/core';
import { Title } from '@angular/platform-browser';
import { NavigationEnd, Router, type RouterStateSnapshot, TitleStrategy } from '@angular/router';
import { filter, map, pairwise, startWith } from 'rxjs';
import { CurrentModel } from './current-model';

/** "Binning · Personal loans, new customers · Tallystone": the page, the model, the product. */
@Injectable({ providedIn: 'root' })
export class PageTitles extends TitleStrategy {
  private readonly title = inject(Title);
  private readonly model = inject(CurrentModel);
  private page: string | undefined;

  override updateTitle(snapshot: RouterStateSnapshot): void {
    this.page = this.buildTitle(snapshot);
    this.write(snapshot.url.startsWith('/models/') ? this.model.name() : null);
  }

  /** Called by the model frame once the model's name is known. */
  named(name: string): void {
    this.write(name);
  }

  private write(model: string | null): void {
    this.title.setTitle([this.page, model, 'Tallystone'].filter(Boolean).join(' · '));
  }
}

/**
 * After a move to another page the focus goes to that page's heading, so that screen readers and the keyboard start where the page
 * starts. A change of query or fragment (a filter, a tab) leaves the focus where it is.
 */
@Injectable({ providedIn: 'root' })
export class FocusOnNavigation {
  private readonly router = inject(Router);
  private readonly document = inject(DOCUMENT);
  private readonly injector = inject(Injector);

  start(): void {
    this.router.events
      .pipe(
        filter((event) => event instanceof NavigationEnd),
        map((event) => event.urlAfterRedirects.split(/[?#]/)[0]),
        startWith(null),
        pairwise(),
        filter(([before, after]) => before !== null && before !== after),
      )
      .subscribe(() => afterNextRender(() => this.focusHeading(), { injector: this.injector }));
  }

  private focusHeading(): void {
    const main = this.document.getElementById('main');
    const heading = main?.querySelector<HTMLElement>('[data-page-heading]') ?? main;
    heading?.setAttribute('tabindex', '-1');
    heading?.focus({ preventScroll: true });
  }
}
