import {
  ChangeDetectionStrategy,
  Component,
  type ElementRef,
  afterRenderEffect,
  computed,
  inject,
  input,
  signal,
  viewChildren,
} from '@angular/core';
import { toSignal } from '@angular/core/rxjs-interop';
import { NavigationEnd, Router, RouterLink } from '@angular/router';
import type { WorkStep } from '@tallystone/contracts/models/schema';
import { filter, map } from 'rxjs';
import { ElementWidth } from '../ui/element-width';

const titles: Readonly<Record<WorkStep['step'], string>> = {
  sample: 'Sample',
  binning: 'Binning',
  fit: 'Fit',
  scorecard: 'Scorecard',
  version: 'Version',
  validation: 'Validation',
  documentation: 'Documentation',
};

const said: Readonly<Record<WorkStep['state'], string>> = {
  done: 'done',
  current: 'being worked on',
  decision: 'waits for a decision',
  ahead: 'not reached',
};

/**
 * The work's rule: a line notched once per step, verdigris as far as the work has come, ochre where something waits for a decision. It is
 * the navigation inside a model; each notch is an ordinary link with its caption.
 *
 * @example <ts-works-rule [steps]="work.steps" />
 */
@Component({
  selector: 'ts-works-rule',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [RouterLink, ElementWidth],
  template: `
    <nav aria-label="Steps of the work">
      <ol [style.--count]="steps().length" (tsWidth)="width.set($event)">
        @for (entry of shown(); track entry.step) {
          <li #item [class]="entry.state" [class.come]="entry.come" [class.on]="entry.on" [class.last]="$last">
            <a [routerLink]="entry.path" [attr.aria-current]="entry.on ? 'step' : null">
              <span class="name">{{ entry.title }}</span>
              <span class="line" aria-hidden="true">
                <svg width="100%" height="14" focusable="false">
                  <path class="after" d="M20 3H4000" />
                  <path class="notch" d="M0 3h8l6 9 6-9" />
                </svg>
              </span>
              <span class="caption">{{ entry.caption }}</span>
              <span class="ts-hidden">, {{ entry.said }}</span>
            </a>
          </li>
        }
      </ol>
    </nav>
  `,
  styleUrl: './works-rule.scss',
})
export class WorksRule {
  private readonly router = inject(Router);
  readonly steps = input.required<readonly WorkStep[]>();

  private readonly items = viewChildren<ElementRef<HTMLElement>>('item');
  protected readonly width = signal(0);
  private readonly url = toSignal(
    this.router.events.pipe(
      filter((event) => event instanceof NavigationEnd),
      map((event) => event.urlAfterRedirects),
    ),
    { initialValue: this.router.url },
  );

  protected readonly shown = computed(() => {
    const url = this.url().split(/[?#]/)[0];
    const steps = this.steps();
    const furthest = steps.findLastIndex((entry) => entry.state !== 'ahead');
    return steps.map((entry, index) => ({
      ...entry,
      title: titles[entry.step],
      said: said[entry.state],
      come: index <= furthest,
      on: url === entry.path || url.startsWith(`${entry.path}/`),
    }));
  });

  constructor() {
    // On a narrow screen the rule scrolls sideways; the step one is on stays in view, also when the screen is turned.
    afterRenderEffect(() => {
      this.width();
      const at = this.shown().findIndex((entry) => entry.on);
      const item = this.items()[at]?.nativeElement;
      const list = item?.parentElement;
      if (item && list) list.scrollLeft = item.offsetLeft - (list.clientWidth - item.clientWidth) / 2;
    });
  }
}
