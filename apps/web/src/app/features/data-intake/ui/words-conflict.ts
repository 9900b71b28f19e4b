import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import type { DictionaryEntry } from '@tallystone/contracts/samples/dictionary';
import { DecisionNotice } from '../../../ui/decision-notice';

const parts = [
  ['Label', (entry: DictionaryEntry) => entry.label],
  ['Unit', (entry: DictionaryEntry) => entry.unit],
  ['Description', (entry: DictionaryEntry) => entry.description],
  ['Treatments', (entry: DictionaryEntry) => entry.treatments.map(({ code, treatment }) => `${code}: ${treatment}`).join('; ')],
] as const;

/** Words of a column that someone else changed too: both are shown, and one of them is chosen. */
@Component({
  selector: 'ts-words-conflict',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, DecisionNotice],
  template: `
    <ts-decision>
      Someone else changed what the dictionary says of <b>{{ conflict().mine.column }}</b> meanwhile. Yours has not been saved:
      take theirs, or save yours over it.
      @for (part of differing(); track part.name) {
        <span class="part">{{ part.name }}: theirs “{{ part.theirs }}”, yours “{{ part.mine }}”.</span>
      }
      <button tsDecide matButton="outlined" type="button" (click)="theirs.emit()">Take theirs</button>
      <button tsDecide matButton="outlined" type="button" (click)="mine.emit()">Save mine</button>
    </ts-decision>
  `,
  styles: `
    .part {
      display: block;
      overflow-wrap: anywhere;
    }
  `,
})
export class WordsConflictNote {
  readonly conflict = input.required<{ readonly mine: DictionaryEntry; readonly theirs: DictionaryEntry }>();
  readonly theirs = output();
  readonly mine = output();

  protected readonly differing = computed(() => {
    const { mine, theirs } = this.conflict();
    return parts.map(([name, of]) => ({ name, mine: of(mine), theirs: of(theirs) })).filter((part) => part.mine !== part.theirs);
  });
}
