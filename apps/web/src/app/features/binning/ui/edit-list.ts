import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { MatSelectModule } from '@angular/material/select';
import type { EditReason } from '@tallystone/contracts/binnings/edits';
import type { BenchEdit } from '../bench/history';
import { moment } from '../../../ui/numbers';
import { editWords } from './edit-words';
import { reasonWords, reasons } from './reason-words';

export interface KnownEdit {
  readonly by: string;
  readonly at: string;
  /** Binning and person that it was carried over from. */
  readonly from: string | null;
}

/** The manual edits in effect, each with its reason; one without stays marked until it has one. */
@Component({
  selector: 'ts-edit-list',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatFormFieldModule, MatInputModule, MatSelectModule],
  template: `
    @for (edit of latestFirst(); track edit.id) {
      <div class="edit">
        <div class="what">
          <span>{{ editWords(edit) }}</span>
          @if (known().get(edit.id); as made) {
            <span class="ts-caption"
              >{{ made.by }}, {{ moment(made.at) }}{{ made.from ? '; carried over from ' + made.from : '' }}</span
            >
          }
        </div>
        @if (editable()) {
          <mat-form-field>
            <mat-label>{{ edit.reason ? 'Reason' : 'Not explained yet' }}</mat-label>
            <mat-select
              [value]="edit.reason?.code ?? (writing() === edit.id ? 'other' : null)"
              (selectionChange)="choose(edit.id, $event.value)"
            >
              @for (reason of reasons; track reason.code) {
                <mat-option [value]="reason.code">{{ reason.label }}</mat-option>
              }
            </mat-select>
          </mat-form-field>
          @if (edit.reason || writing() === edit.id) {
            <mat-form-field>
              <mat-label>{{ (edit.reason?.code ?? 'other') === 'other' ? 'In your words' : 'More on it (optional)' }}</mat-label>
              <input matInput maxlength="1000" [value]="edit.reason?.text ?? ''" (change)="write(edit, $event)" />
            </mat-form-field>
          }
        } @else {
          <span class="ts-second">{{ edit.reason ? words(edit.reason) : 'Not explained' }}</span>
        }
      </div>
    } @empty {
      <p class="ts-second">The bins are as they were classed automatically.</p>
    }
  `,
  styles: `
    :host {
      display: grid;
      gap: 14px;
    }
    .edit {
      display: grid;
      gap: 8px;
      padding-bottom: 12px;
      border-bottom: 1px solid var(--ts-hairline);
    }
    .what {
      display: flex;
      flex-wrap: wrap;
      justify-content: space-between;
      gap: 0 16px;
    }
  `,
})
export class EditList {
  readonly edits = input.required<readonly BenchEdit[]>();
  /** Who made those that are saved, and when. */
  readonly known = input<ReadonlyMap<string, KnownEdit>>(new Map());
  readonly editable = input(false);
  readonly writing = input<string | null>(null);
  readonly explained = output<{ id: string; reason: EditReason }>();
  /** "Another reason" was chosen and its words are still to come. */
  readonly began = output<string>();

  protected readonly reasons = reasons;
  protected readonly moment = moment;
  protected readonly editWords = editWords;
  protected readonly latestFirst = computed(() => [...this.edits()].reverse());

  protected choose(id: string, code: EditReason['code']): void {
    const text = this.edits().find((edit) => edit.id === id)?.reason?.text ?? '';
    if (code === 'other' && text === '') this.began.emit(id);
    else this.explained.emit({ id, reason: { code, text } });
  }

  protected write(edit: BenchEdit, event: Event): void {
    const text = (event.target as HTMLInputElement).value.trim();
    const code = edit.reason?.code ?? 'other';
    if (code === 'other' && text === '') return;
    this.explained.emit({ id: edit.id, reason: { code, text } });
  }

  protected readonly words = reasonWords;
}
