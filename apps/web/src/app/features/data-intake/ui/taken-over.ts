import { NgTemplateOutlet } from '@angular/common';
import { ChangeDetectionStrategy, Component, input } from '@angular/core';
import type { CarriedDictionary, KeptDraft } from '@tallystone/contracts/samples/dictionary';
import { plural } from '../../../ui/numbers';

/** What was taken over from before, in a sentence, and what could not be. */
export interface TakenOver {
  readonly words: string;
  /** What was written by somebody and is lost: it is shown at once. */
  readonly lost: readonly Lost[];
  /** What is merely not here, behind a sentence that stands for it until it is opened. */
  readonly folded: { readonly summary: string; readonly list: readonly Lost[] } | null;
}
interface Lost {
  readonly what: string;
  readonly why: string;
}

const spoken = { outcome: 'the outcome', declined: 'who was declined', partition: 'the partition' } as const;

/** From an earlier sample of the model: many columns of it may not be here, which is nothing to worry about. */
export function carriedOver({ columns, fileName, wordsFrom, notCarried, definition }: CarriedDictionary): TakenOver {
  const many = plural(columns.length, 'column');
  const words =
    wordsFrom === null
      ? `Roles, special codes and words of ${many} are carried over from ${fileName}`
      : wordsFrom === fileName
        ? `Words of ${many} are carried over from ${fileName}, which has no definition yet`
        : `Roles and special codes of ${many} are carried over from ${fileName}, words from ${wordsFrom}`;
  const meanings = definition?.carried ?? [];
  const also = meanings.length === 0 ? '' : ` So is what their values mean: ${meanings.map((what) => spoken[what]).join(', ')}.`;
  return {
    words: `${words}: same name and kind.${also}`,
    lost: definition?.lost ?? [],
    folded:
      notCarried.length === 0
        ? null
        : {
            summary: `${plural(notCarried.length, 'column')} not carried over`,
            list: notCarried.map(({ column, why }) => ({ what: column, why })),
          },
  };
}

/** From the draft, when the file was read again: what is lost was written by somebody. */
export function keptOver({ lost }: KeptDraft): TakenOver {
  const but = lost.length === 0 ? '' : ` but for ${plural(lost.length, 'point')}`;
  return { words: `The file was read again: the draft stayed as it was${but}.`, lost, folded: null };
}

/**
 * The note that says what was taken over from before, and what was not, with its reason.
 *
 * @example <ts-taken-over [note]="keptOver(dictionary.readAgain)" />
 */
@Component({
  selector: 'ts-taken-over',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [NgTemplateOutlet],
  template: `
    <p>{{ note().words }}</p>
    @if (note().lost.length > 0) {
      <ng-container [ngTemplateOutlet]="list" [ngTemplateOutletContext]="{ $implicit: note().lost }" />
    }
    @if (note().folded; as folded) {
      <details>
        <summary>{{ folded.summary }}</summary>
        <ng-container [ngTemplateOutlet]="list" [ngTemplateOutletContext]="{ $implicit: folded.list }" />
      </details>
    }
    <ng-template #list let-entries>
      <ul>
        @for (entry of entries; track $index) {
          <li>
            <b>{{ entry.what }}</b> {{ entry.why }}
          </li>
        }
      </ul>
    </ng-template>
  `,
  styles: `
    :host {
      display: grid;
      gap: 4px;
      padding: 10px 14px;
      background: var(--ts-sunk);
      border-radius: var(--ts-corner);
    }
    summary {
      min-height: 24px;
      cursor: pointer;
    }
    ul {
      padding-left: 20px;
    }
  `,
})
export class TakenOverNote {
  readonly note = input.required<TakenOver>();
}
