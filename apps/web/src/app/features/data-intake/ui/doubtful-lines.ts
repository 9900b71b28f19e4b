import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { DoubtfulLine, DoubtfulLines as Found } from '@tallystone/contracts/samples/reading';
import { type Column } from '../../../ui/column';
import { CellTemplate, DenseTable } from '../../../ui/dense-table';
import { count, plural } from '../../../ui/numbers';

/** Where doubtful lines were looked for: in the whole file or a part of it under the choices shown, or when the file was last read. */
export type Looked = 'file' | 'part' | 'reading';

const parts = { file: 'of the file', part: 'of the part of the file that was looked at', reading: '' };

/** The lines of the file in which the reader finds something wrong, as they stand there, each with what it is. Nothing where there are none. */
@Component({
  selector: 'ts-doubtful-lines',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [CellTemplate, DenseTable],
  template: `
    @if (found().count > 0) {
      <section aria-label="Doubtful lines">
        <h3>Doubtful lines</h3>
        <p>{{ finding() }}</p>
        <ts-table
          caption="Doubtful lines of the file"
          [columns]="columns"
          [rows]="found().lines"
          [identify]="byLine"
          [copyable]="false"
          [stacks]="true"
        >
          <ng-template tsCell="text" [tsCellRows]="found().lines" let-row>
            @if (row.text === '') {
              <span class="ts-second">(blank)</span>
            } @else {
              <code>{{ row.text }}{{ row.clipped ? '…' : '' }}</code>
            }
          </ng-template>
        </ts-table>
      </section>
    }
  `,
  styles: `
    section {
      display: grid;
      grid-template-columns: minmax(0, 1fr);
      gap: 10px;
    }
    // Its blanks and quotes are what is looked at; where it has no blank it breaks all the same.
    code {
      display: inline-block;
      font-family: ui-monospace, monospace;
      white-space: pre-wrap;
      overflow-wrap: anywhere;
    }
  `,
})
export class DoubtfulLines {
  readonly found = input.required<Found>();
  readonly looked = input.required<Looked>();

  protected readonly finding = computed(() => {
    const { lines, count: all } = this.found();
    const number = plural(all, 'line');
    const said =
      this.looked() === 'reading'
        ? `When the file was last read, ${number} of it ${all === 1 ? 'was' : 'were'} doubtful`
        : `${number} ${parts[this.looked()]} ${all === 1 ? 'is' : 'are'} doubtful`;
    return lines.length < all ? `${said}; these are the first ${count(lines.length)}.` : `${said}.`;
  });

  protected readonly columns: readonly Column<DoubtfulLine>[] = [
    { key: 'line', label: 'Line', kind: 'count', value: ({ line }) => line },
    { key: 'record', label: 'Record', kind: 'count', value: ({ record }) => record, format: ({ record }) => (record === null ? 'header' : count(record)) },
    { key: 'doubt', label: 'What is doubtful', value: ({ doubts }) => doubts.join('; '), width: 40 },
    { key: 'text', label: 'The line as it stands', value: ({ text }) => text, width: 80 },
  ]; // prettier-ignore
  protected readonly byLine = ({ line }: DoubtfulLine): string => String(line);
}
