import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { takesPart } from '@tallystone/contracts/samples/flags';
import type { ColumnQuality, QualityFlag } from '@tallystone/contracts/samples/quality';
import { MomentPipe } from '../../../ui/number-pipes';
import { flagTitle, inOrder, waits } from './quality-words';

export interface AskedAnswer {
  readonly flag: QualityFlag;
  readonly answer: 'accepted' | 'not used';
}

/** What the report raises, each with its sentence and the answer that stands; those that wait come first. */
@Component({
  selector: 'ts-quality-flags',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, MomentPipe],
  template: `
    <ul>
      @for (entry of entries(); track entry.key) {
        <li [class.waits]="entry.waits">
          <p class="title">
            @if (entry.flag.column; as column) {
              <button class="column" type="button" (click)="show.emit(column)">{{ column }}</button>
            } @else {
              <span>The file</span>
            }
            <b>{{ entry.title }}</b>
          </p>
          <p>{{ entry.flag.finding }}</p>
          @if (entry.flag.answer; as given) {
            <p class="ts-second">
              {{ given.answer === 'accepted' ? 'Accepted' : 'Not used' }}: {{ given.reason }}
              <span class="ts-caption">{{ given.by }}, {{ given.at | tsMoment }}</span>
            </p>
          } @else if (entry.out) {
            <p class="ts-second">The column takes no part.</p>
          }
          @if (answerable() && !entry.out) {
            <div class="ts-actions ts-no-print">
              <button
                matButton
                type="button"
                [attr.aria-label]="(entry.flag.answer ? 'Answer anew' : 'Accept') + ': ' + entry.name"
                (click)="answer.emit({ flag: entry.flag, answer: 'accepted' })"
              >
                {{ entry.flag.answer ? 'Answer anew' : 'Accept' }}
              </button>
              @if (entry.flag.column) {
                <button
                  matButton
                  type="button"
                  [attr.aria-label]="'Not used: ' + entry.name"
                  (click)="answer.emit({ flag: entry.flag, answer: 'not used' })"
                >
                  Not used
                </button>
              }
            </div>
          }
        </li>
      } @empty {
        <li>Nothing stands out.</li>
      }
    </ul>
  `,
  styles: `
    ul {
      list-style: none;
      display: grid;
      grid-template-columns: minmax(0, 1fr);
    }
    li {
      display: grid;
      gap: 2px 24px;
      grid-template-columns: minmax(0, 1fr) auto;
      padding: 8px 0 8px 12px;
      border-bottom: 1px solid var(--ts-hairline);
      border-left: 3px solid transparent;
      break-inside: avoid;
    }
    li > p {
      grid-column: 1;
      overflow-wrap: anywhere;
    }
    li > .ts-actions {
      grid-column: 2;
      grid-row: 1 / span 3;
      align-self: center;
    }
    .waits {
      border-left-color: var(--ts-ochre-mark);
    }
    .title {
      display: flex;
      flex-wrap: wrap;
      gap: 0 12px;
    }
    .ts-caption {
      white-space: nowrap;
      margin-left: 8px;
    }
    .column {
      font: inherit;
      color: var(--ts-primary);
      background: none;
      border: 0;
      min-height: 24px;
      padding: 0;
      cursor: pointer;
      text-align: left;
      text-decoration: underline;
      text-decoration-thickness: 1px;
      text-underline-offset: 3px;
    }
    @media (max-width: 599px) {
      li {
        grid-template-columns: minmax(0, 1fr);
      }
      li > .ts-actions {
        grid-column: 1;
        grid-row: auto;
      }
    }
  `,
})
export class QualityFlags {
  readonly flags = input.required<readonly QualityFlag[]>();
  readonly roles = input.required<ReadonlyMap<string, ColumnQuality['role']>>();
  readonly answerable = input(false);
  readonly answer = output<AskedAnswer>();
  /** A column to be shown. */
  readonly show = output<string>();

  protected readonly entries = computed(() =>
    inOrder(this.flags(), this.roles()).map((flag) => ({
      flag,
      key: `${flag.column ?? ''} ${flag.code}`,
      title: flagTitle(flag),
      name: `${flag.column ?? 'the file'}, ${flagTitle(flag)}`,
      waits: waits(flag, this.roles()),
      out: flag.column !== null && !takesPart(this.roles().get(flag.column)),
    })),
  );
}
