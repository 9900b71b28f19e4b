import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
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
            [value]="percent()"
            [disabled]="!editable()"
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
            [value]="seeded.seed"
            [disabled]="!editable()"
            (change)="setSeed($event)"
          />
        </mat-form-field>
      </div>
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
  protected readonly percent = computed(() => Math.round((this.seeded()?.holdOutShare ?? 0) * 1000) / 10);
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
    const share = Number((event.target as HTMLInputElement).value) / 100;
    if (seeded && share >= 0 && share <= 0.9) this.changed.emit({ ...seeded, holdOutShare: share });
  }

  protected setSeed(event: Event): void {
    const seeded = this.seeded();
    const seed = Number((event.target as HTMLInputElement).value);
    if (seeded && Number.isInteger(seed) && seed >= 0 && seed < 2 ** 32) this.changed.emit({ ...seeded, seed });
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
