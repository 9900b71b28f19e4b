import { ChangeDetectionStrategy, Component, computed, input, linkedSignal, output } from '@angular/core';
import { MatCheckboxModule } from '@angular/material/checkbox';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { MatRadioModule } from '@angular/material/radio';
import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { DraftPartition } from '@tallystone/contracts/samples/definition';
import { count } from '../../../ui/numbers';
import { mappedValues } from './mapped-values';
import { type MappedValue, type Meaning, ValueMapping } from './value-mapping';

const parts: readonly Meaning[] = [
  { key: 'development', label: 'Development' },
  { key: 'holdOut', label: 'Hold-out' },
  { key: 'outOfTime', label: 'Out-of-time' },
];

/** How the sample is split: by the values of a column, or hold-out drawn by a seed and out-of-time by date. */
@Component({
  selector: 'ts-partition-editor',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatCheckboxModule, MatFormFieldModule, MatInputModule, MatRadioModule, ValueMapping],
  template: `
    <mat-radio-group
      aria-label="How the sample is split"
      [value]="partition().by"
      [disabled]="!editable()"
      (change)="choose($event.value)"
    >
      <mat-radio-button value="seed">Hold-out drawn by a seed, goods and bads apart</mat-radio-button>
      <mat-radio-button value="column" [disabled]="column() === null">
        By the values of {{ column()?.column ?? 'a column with the role of the partition' }}
      </mat-radio-button>
    </mat-radio-group>
    @if (seeded(); as seeded) {
      <div class="fields">
        <mat-form-field>
          <mat-label>Hold-out, per cent</mat-label>
          <input
            matInput
            type="number"
            min="0"
            max="90"
            step="1"
            [value]="shareTyped() ?? percent()"
            [disabled]="!editable()"
            [attr.aria-invalid]="shareTyped() === null ? null : true"
            (change)="setShare($event)"
          />
        </mat-form-field>
        <mat-form-field>
          <mat-label>Seed</mat-label>
          <input
            matInput
            type="number"
            min="0"
            max="4294967295"
            step="1"
            [value]="seedTyped() ?? seeded.seed"
            [disabled]="!editable()"
            [attr.aria-invalid]="seedTyped() === null ? null : true"
            (change)="setSeed($event)"
          />
        </mat-form-field>
      </div>
      @if (shareTyped() !== null) {
        <p class="refused" role="alert">
          Hold-out takes a per cent from 0 to 90, and 0 where there is none. Until then it stays {{ percent() }} per cent.
        </p>
      }
      @if (seedTyped() !== null) {
        <p class="refused" role="alert">
          A seed is a whole number from 0 to {{ largest }}. Until then it stays {{ seeded.seed }}.
        </p>
      }
      <mat-checkbox
        [checked]="seeded.outOfTime !== null"
        [disabled]="!editable() || date() === null"
        (change)="setOutOfTime($event.checked)"
      >
        Out-of-time by {{ date()?.column ?? 'a column with the role of the application date' }}
      </mat-checkbox>
      @if (seeded.outOfTime; as period) {
        <div class="fields">
          <mat-form-field>
            <mat-label>From, included</mat-label>
            <input
              matInput
              type="date"
              [value]="period.from ?? ''"
              [disabled]="!editable()"
              (change)="setPeriod('from', $event)"
            />
          </mat-form-field>
          <mat-form-field>
            <mat-label>To, included; empty = open</mat-label>
            <input matInput type="date" [value]="period.to ?? ''" [disabled]="!editable()" (change)="setPeriod('to', $event)" />
          </mat-form-field>
        </div>
        @if (date()?.date; as range) {
          <p class="ts-caption">The file runs from {{ range.first }} to {{ range.last }}.</p>
        }
      }
    } @else {
      <ts-value-mapping
        label="Partition"
        [values]="values()"
        [meanings]="parts"
        [rows]="column()?.rows ?? 1"
        [complete]="column()?.valuesComplete ?? true"
        [editable]="editable()"
        (mapped)="map($event)"
      />
      @if (unlisted(); as words) {
        <p>{{ words }}</p>
      }
    }
  `,
  styles: `
    :host,
    mat-radio-group {
      display: grid;
      gap: 12px;
      grid-template-columns: minmax(0, 1fr);
    }
    .fields {
      display: grid;
      grid-template-columns: repeat(2, minmax(0, 220px));
      gap: 16px;
    }
    .refused {
      color: var(--mat-sys-error);
    }
    @media (max-width: 480px) {
      .fields {
        grid-template-columns: minmax(0, 1fr);
      }
    }
  `,
})
export class PartitionEditor {
  readonly partition = input.required<DraftPartition>();
  /** The column with the role of the partition, of the application date. */
  readonly column = input<ColumnProfile | null>(null);
  readonly date = input<ColumnProfile | null>(null);
  readonly editable = input(false);
  readonly changed = output<DraftPartition>();
  protected readonly parts = parts;

  protected readonly seeded = computed(() => {
    const partition = this.partition();
    return partition.by === 'seed' ? partition : null;
  });
  private readonly heldOut = computed(() => this.seeded()?.holdOutShare);
  private readonly drawnBy = computed(() => this.seeded()?.seed);
  // Without the digits that a hundredth adds, and with all that were typed.
  protected readonly percent = computed(() => Number(((this.heldOut() ?? 0) * 100).toPrecision(12)));
  protected readonly largest = 2 ** 32 - 1;
  /** What was typed and could not be taken: it stays in its field with the reason, until the partition has another value there. */
  protected readonly shareTyped = linkedSignal<number | undefined, string | null>({
    source: this.heldOut,
    computation: () => null,
  });
  protected readonly seedTyped = linkedSignal<number | undefined, string | null>({
    source: this.drawnBy,
    computation: () => null,
  });
  protected readonly values = computed<MappedValue[]>(() => {
    const partition = this.partition();
    if (partition.by !== 'column') return [];
    const { by: _by, ...lists } = partition;
    const column = this.column();
    return column ? mappedValues(column, lists) : [];
  });

  /** What the list leaves out, and what to do about it. */
  protected readonly unlisted = computed(() => {
    const column = this.column();
    const rest = column ? column.distinct - column.mostFrequent.length : 0;
    return column && rest > 0
      ? `${column.column} has ${count(column.distinct)} different values, and ${count(rest)} of them are not listed here: rows with those are in no partition. Give the role of the partition to a column with fewer values, exclude these rows, or draw hold-out by a seed.`
      : null;
  });

  protected choose(by: 'seed' | 'column'): void {
    if (by === this.partition().by) return;
    this.changed.emit(
      by === 'seed'
        ? { by: 'seed', seed: 1, holdOutShare: 0.3, outOfTime: null }
        : { by: 'column', development: [], holdOut: [], outOfTime: [] },
    );
  }

  protected setShare(event: Event): void {
    const seeded = this.seeded();
    const typed = (event.target as HTMLInputElement).value;
    const percent = numberOf(typed);
    const taken = percent !== null && percent >= 0 && percent <= 90;
    this.shareTyped.set(taken ? null : typed);
    if (seeded && taken) this.changed.emit({ ...seeded, holdOutShare: percent / 100 });
  }

  protected setSeed(event: Event): void {
    const seeded = this.seeded();
    const typed = (event.target as HTMLInputElement).value;
    const seed = numberOf(typed);
    const taken = seed !== null && Number.isInteger(seed) && seed >= 0 && seed <= this.largest;
    this.seedTyped.set(taken ? null : typed);
    if (seeded && taken) this.changed.emit({ ...seeded, seed });
  }

  protected setOutOfTime(on: boolean): void {
    const seeded = this.seeded();
    if (!seeded) return;
    const months = this.date()?.date?.months ?? [];
    // The last sixth of the months, to begin with: the latest cohort.
    const from = months.length > 0 ? `${months[Math.max(0, Math.floor((months.length * 5) / 6))].month}-01` : null;
    this.changed.emit({ ...seeded, outOfTime: on ? { from, to: null } : null });
  }

  protected setPeriod(end: 'from' | 'to', event: Event): void {
    const seeded = this.seeded();
    if (!seeded?.outOfTime) return;
    this.changed.emit({ ...seeded, outOfTime: { ...seeded.outOfTime, [end]: (event.target as HTMLInputElement).value || null } });
  }

  protected map({ value, meaning }: { value: string; meaning: string | null }): void {
    const partition = this.partition();
    if (partition.by !== 'column') return;
    const without = (list: readonly string[]): string[] => list.filter((entry) => entry !== value);
    const next = {
      by: 'column' as const,
      development: without(partition.development),
      holdOut: without(partition.holdOut),
      outOfTime: without(partition.outOfTime),
    };
    if (meaning !== null) next[meaning as 'development' | 'holdOut' | 'outOfTime'].push(value);
    this.changed.emit(next);
  }
}

/** Null for an empty field, which is not 0; what is no number the browser gives as empty. */
function numberOf(typed: string): number | null {
  return typed.trim() === '' ? null : Number(typed);
}
