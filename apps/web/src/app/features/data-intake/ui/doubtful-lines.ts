import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { DoubtfulLine, Preview } from '@tallystone/contracts/samples/reading';
import { type Column } from '../../../ui/column';
import { DenseTable } from '../../../ui/dense-table';
import { count, plural } from '../../../ui/numbers';

/** The lines of the file in which the reader finds something wrong, as they stand there, each with what it is. Nothing where there are none. */
@Component({
  selector: 'ts-doubtful-lines',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [DenseTable],
  template: `
    @if (preview().doubtful.count > 0) {
      <section aria-label="Doubtful lines">
        <h3>Doubtful lines</h3>
        <p>{{ finding() }}</p>
        <ts-table
          caption="Doubtful lines of the file"
          [columns]="columns"
          [rows]="preview().doubtful.lines"
          [identify]="byLine"
          [copyable]="false"
        />
      </section>
    }
  `,
  styles: `
    section {
      display: grid;
      grid-template-columns: minmax(0, 1fr);
      gap: 10px;
    }
  `,
})
export class DoubtfulLines {
  readonly preview = input.required<Preview>();

  protected readonly finding = computed(() => {
    const { doubtful, looked } = this.preview();
    const part = looked.whole ? 'of the file' : 'of the part of the file that was looked at';
    const all = doubtful.count === 1 ? `1 line ${part} is doubtful` : `${plural(doubtful.count, 'line')} ${part} are doubtful`;
    const shown = doubtful.lines.length;
    return shown < doubtful.count ? `${all}; these are the first ${count(shown)}.` : `${all}.`;
  });

  protected readonly columns: readonly Column<DoubtfulLine>[] = [
    { key: 'line', label: 'Line', kind: 'count', value: ({ line }) => line },
    { key: 'record', label: 'Record', kind: 'count', value: ({ record }) => record, format: ({ record }) => (record === null ? 'header' : count(record)) },
    { key: 'doubt', label: 'What is doubtful', value: ({ doubts }) => doubts.join('; '), width: 40 },
    {
      key: 'text',
      label: 'The line as it stands',
      value: ({ text }) => text,
      format: ({ text, clipped }) => (text === '' ? '(blank)' : clipped ? `${text}…` : text),
      width: 80,
    },
  ]; // prettier-ignore
  protected readonly byLine = ({ line }: DoubtfulLine): string => String(line);
}
