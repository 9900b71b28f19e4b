import { ChangeDetectionStrategy, Component, computed, input, output, signal } from '@angular/core';
import { MatCheckboxModule } from '@angular/material/checkbox';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { MatSelectModule } from '@angular/material/select';
import type { Preview, ReadingChoices } from '@tallystone/contracts/samples/reading';
import { readListed, writeListed } from './listed-values';
import { dateOrders, orderWords } from './date-orders';

type Choice = Preview['reasons'][number]['choice'];

/** The reading choices with the reason why each is proposed. Every change is shown on the first rows at once. */
@Component({
  selector: 'ts-reading-form',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatCheckboxModule, MatFormFieldModule, MatInputModule, MatSelectModule],
  template: `
    <div class="choices">
      <mat-form-field>
        <mat-label>Delimiter</mat-label>
        <mat-select
          [value]="choices().delimiter"
          [disabled]="disabled()"
          (selectionChange)="changed.emit({ delimiter: $event.value })"
        >
          <mat-option value=",">Comma ,</mat-option>
          <mat-option value=";">Semicolon ;</mat-option>
          <mat-option value="&#9;">Tab</mat-option>
          <mat-option value="|">Vertical bar |</mat-option>
        </mat-select>
        <mat-hint>{{ why('delimiter') }}</mat-hint>
      </mat-form-field>
      <mat-form-field>
        <mat-label>Encoding</mat-label>
        <mat-select
          [value]="choices().encoding"
          [disabled]="disabled()"
          (selectionChange)="changed.emit({ encoding: $event.value })"
        >
          <mat-option value="utf-8">UTF-8</mat-option>
          <mat-option value="windows-1252">Windows-1252</mat-option>
          <mat-option value="utf-16le">UTF-16, little-endian</mat-option>
          <mat-option value="utf-16be">UTF-16, big-endian</mat-option>
        </mat-select>
        <mat-hint>{{ why('encoding') }}</mat-hint>
      </mat-form-field>
      <mat-form-field>
        <mat-label>Decimal sign</mat-label>
        <mat-select
          [value]="choices().decimal"
          [disabled]="disabled()"
          (selectionChange)="changed.emit({ decimal: $event.value })"
        >
          <mat-option value=".">Point (1.5)</mat-option>
          <mat-option value=",">Comma (1,5)</mat-option>
        </mat-select>
        <mat-hint>{{ why('decimal') }}</mat-hint>
      </mat-form-field>
      <mat-form-field>
        <mat-label>Thousands sign</mat-label>
        <mat-select
          [value]="choices().thousands ?? ''"
          [disabled]="disabled()"
          (selectionChange)="changed.emit({ thousands: $event.value || null })"
        >
          <mat-option value="">None</mat-option>
          <mat-option value=",">Comma (1,000)</mat-option>
          <mat-option value=".">Point (1.000)</mat-option>
          <mat-option value=" ">Blank (1 000)</mat-option>
          <mat-option value="&#160;">No-break blank</mat-option>
          <mat-option value="&#8239;">Narrow no-break blank</mat-option>
          <mat-option value="'">Apostrophe (1'000)</mat-option>
        </mat-select>
        <mat-hint>{{ why('thousands') }}</mat-hint>
      </mat-form-field>
      <mat-form-field>
        <mat-label>Date order</mat-label>
        <mat-select
          [value]="choices().dateOrder ?? null"
          [disabled]="disabled()"
          placeholder="Please choose"
          (selectionChange)="changed.emit({ dateOrder: $event.value })"
        >
          @for (order of orders; track order) {
            <mat-option [value]="order">{{ orderWords(order) }}</mat-option>
          }
        </mat-select>
        <mat-hint>{{ why('dateOrder') }}</mat-hint>
      </mat-form-field>
      @if (choices().dateTimes; as dateTimes) {
        <mat-form-field>
          <mat-label>Dates with a time</mat-label>
          <mat-select [value]="dateTimes" [disabled]="disabled()" (selectionChange)="changed.emit({ dateTimes: $event.value })">
            <mat-option value="day">Their day (2024-04-03 10:15 is 2024-04-03)</mat-option>
            <mat-option value="text">Text, as they stand</mat-option>
          </mat-select>
          <mat-hint>{{ why('dateTimes') }}</mat-hint>
        </mat-form-field>
      }
      <mat-form-field>
        <mat-label>Missing, beside the empty field</mat-label>
        <input matInput [value]="missing()" [disabled]="disabled()" placeholder="NA, NULL" (change)="setMissing($event)" />
        <mat-hint>{{
          notTaken() ?? (why('missing') || 'Parted by commas; in quotes where one holds a comma or blanks.')
        }}</mat-hint>
      </mat-form-field>
      <div>
        <mat-checkbox [checked]="choices().trim" [disabled]="disabled()" (change)="changed.emit({ trim: $event.checked })">
          Remove blanks around fields
        </mat-checkbox>
        <p class="ts-caption">{{ why('trim') }}</p>
      </div>
    </div>
  `,
  styles: `
    .choices {
      display: grid;
      grid-template-columns: repeat(auto-fill, minmax(min(100%, 280px), 1fr));
      gap: 20px 24px;
      align-items: start;
    }
  `,
})
export class ReadingForm {
  readonly choices = input.required<ReadingChoices>();
  readonly reasons = input<Preview['reasons']>([]);
  readonly disabled = input(false);
  readonly changed = output<Partial<ReadingChoices>>();

  protected readonly orders = dateOrders;
  protected readonly orderWords = orderWords;
  protected readonly missing = computed(() => writeListed(this.choices().missing.filter((token) => token !== '')));
  protected readonly notTaken = signal<string | null>(null);

  protected why(choice: Choice): string {
    return this.reasons().find((entry) => entry.choice === choice)?.reason ?? '';
  }

  protected setMissing(event: Event): void {
    const tokens = readListed((event.target as HTMLInputElement).value);
    this.notTaken.set(tokens ? null : 'A quote is not closed, so nothing was changed. Write it as "a, b", " ".');
    if (tokens) this.changed.emit({ missing: ['', ...tokens.filter((token) => token !== '')] });
  }
}
