import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { ActEntry } from '@tallystone/contracts/versions/schema';
import { moment } from '../../../ui/numbers';
import { actName, isSignature } from './version-view';

/** The life of a version: one line, a notch for each act, who and when and what they said. Signatures are cut deeper. */
@Component({
  selector: 'ts-life-line',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <ol>
      @for (entry of entries(); track entry.id) {
        <li [class.signed]="entry.signed">
          <svg width="22" height="26" viewBox="0 0 22 26" aria-hidden="true" focusable="false">
            <path [attr.d]="entry.signed ? 'M3 0v4l13 9-13 9v4' : 'M3 0v7l8 6-8 6v7'" />
          </svg>
          <div>
            <p>
              <b>{{ entry.name }}</b>
              <span class="ts-second"> by {{ entry.by }}, {{ entry.role }}</span>
            </p>
            @if (entry.conclusion) {
              <p class="conclusion">{{ entry.conclusion }}</p>
            }
            @if (entry.statement) {
              <p class="statement">{{ entry.statement }}</p>
            }
            @if (entry.conditions.length > 0) {
              <ul aria-label="Conditions">
                @for (condition of entry.conditions; track $index) {
                  <li class="condition">{{ condition }}</li>
                }
              </ul>
            }
            <p class="ts-caption">{{ entry.when }}{{ entry.signed ? ', signature' : '' }}</p>
          </div>
        </li>
      }
    </ol>
  `,
  styles: `
    ol {
      list-style: none;
    }
    ol > li {
      display: grid;
      grid-template-columns: 22px minmax(0, 1fr);
      gap: 10px;
      position: relative;
      padding-bottom: 18px;
    }
    ol > li:not(:last-child)::before {
      content: '';
      position: absolute;
      left: 1.8px;
      top: 25px;
      bottom: -1px;
      border-left: 2.4px solid var(--ts-primary);
    }
    path {
      fill: none;
      stroke: var(--ts-primary);
      stroke-width: 2.4;
      stroke-linejoin: round;
    }
    .signed path {
      fill: var(--ts-primary-container);
    }
    .conclusion {
      font-weight: 600;
      color: var(--ts-primary);
    }
    .statement {
      overflow-wrap: anywhere;
      white-space: pre-line;
    }
    .condition {
      margin-left: 18px;
    }
  `,
})
export class LifeLine {
  readonly acts = input.required<readonly ActEntry[]>();
  protected readonly entries = computed(() =>
    this.acts().map((entry) => ({ ...entry, name: actName(entry.act), when: moment(entry.at), signed: isSignature(entry.act) })),
  );
}
