import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { RouterLink } from '@angular/router';
import type { Gate } from '@tallystone/contracts/versions/schema';
import { gateTitle, gateWords } from './version-view';

/** What a gate asks for: what holds, and what is missing, exactly, with the way to where it is put right. */
@Component({
  selector: 'ts-gate-list',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [RouterLink],
  template: `
    <h3>{{ title() }}</h3>
    <p class="ts-second">{{ words() }}</p>
    <ul>
      @for (item of items(); track item.code) {
        <li [class.open]="!item.holds">
          <svg width="16" height="16" viewBox="0 0 16 16" aria-hidden="true" focusable="false">
            @if (item.holds) {
              <path class="held" d="M1 3h14v5h-4l-3 4-3-4H1z" />
            } @else {
              <path d="M1 4h4l3 5 3-5h4" />
            }
          </svg>
          <div>
            <p>
              @if (item.link; as link) {
                <a [routerLink]="link.path" [queryParams]="link.query">{{ item.label }}</a>
              } @else {
                {{ item.label }}
              }
              <span class="ts-hidden">, {{ item.holds ? 'there' : 'missing' }}</span>
            </p>
            <p class="ts-caption">{{ item.detail }}</p>
          </div>
        </li>
      }
    </ul>
  `,
  styles: `
    :host {
      display: block;
    }
    ul {
      list-style: none;
      margin-top: 8px;
    }
    li {
      display: grid;
      grid-template-columns: 16px minmax(0, 1fr);
      gap: 10px;
      padding: 7px 0;
      border-bottom: 1px solid var(--ts-hairline);
    }
    svg {
      margin-top: 3px;
    }
    path {
      fill: none;
      stroke: var(--ts-ahead);
      stroke-width: 1.8;
    }
    .held {
      fill: var(--ts-primary);
      stroke: none;
    }
    .open p:first-child {
      font-weight: 600;
    }
    .ts-caption {
      overflow-wrap: anywhere;
    }
  `,
})
export class GateList {
  readonly gate = input.required<Gate>();
  /** The page this list stands on: an item that would only lead here is no link. */
  readonly here = input('');
  protected readonly title = computed(() => gateTitle(this.gate()));
  protected readonly words = computed(() => gateWords(this.gate()));
  /** What is missing first. */
  protected readonly items = computed(() =>
    [...this.gate().items]
      .sort((a, b) => Number(a.holds) - Number(b.holds))
      .map((item) => ({ ...item, link: item.path === null || item.holds || item.path === this.here() ? null : linkOf(item.path) })),
  );
}

/** "/a/b?fit=1" as commands and query of a router link. */
export function linkOf(path: string): { readonly path: string; readonly query: Record<string, string> } {
  const [place, query = ''] = path.split('?');
  return { path: place, query: Object.fromEntries(new URLSearchParams(query)) };
}
