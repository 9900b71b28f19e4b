import { ChangeDetectionStrategy, Component, inject, input, output } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import type { Binning } from '@tallystone/contracts/binnings/schema';
import { Ask } from '../../../ui/ask';
import { PartitionMark } from '../../../ui/partition-mark';

/** Whether the out-of-time figures are covered, and the way to open them. */
@Component({
  selector: 'ts-out-of-time-cover',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, PartitionMark],
  template: `
    @if (state() === 'covered') {
      <ts-partition partition="outOfTime" [covered]="true" />
      @if (mayOpen()) {
        <button matButton type="button" (click)="ask()">Open…</button>
      }
      @if (openings(); as words) {
        <span class="ts-caption">{{ words }}</span>
      }
    } @else if (state() === 'opened') {
      <ts-partition partition="outOfTime" />
      <span class="ts-caption">{{ openings() ?? 'opened' }}</span>
    }
  `,
  styles: `
    :host {
      display: inline-flex;
      align-items: center;
      gap: 6px;
    }
    :host:empty {
      display: none;
    }
  `,
})
export class OutOfTimeCover {
  private readonly asking = inject(Ask);
  readonly state = input.required<Binning['outOfTime']>();
  /** How often these rows were opened, and how much of that under other definitions. */
  readonly openings = input<Binning['outOfTimeOpenings']>(null);
  readonly mayOpen = input(false);
  readonly opened = output<string>();

  protected async ask(): Promise<void> {
    const answer = await this.asking.for({
      title: 'Open the out-of-time figures?',
      text: 'They are covered so that bins and fits are not chosen by them. Opening is recorded, holds for every binning and fit of this definition, counts for every other definition over the same rows, and the documentation says how often it happened before freezing.',
      accept: 'Open',
      reason: { label: 'Why now', required: true, hint: 'A sentence, of ten characters at least' },
    });
    if (answer) this.opened.emit(answer.reason);
  }
}
