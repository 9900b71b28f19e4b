import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { Preview } from '@tallystone/contracts/samples/reading';
import { type Column } from '../../../ui/column';
import { DenseTable } from '../../../ui/dense-table';
import { count } from '../../../ui/numbers';

type Row = Preview['rows'][number];

/** The first rows as they would be read, and the columns that deserve a look. */
@Component({
  selector: 'ts-preview-table',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [DenseTable],
  template: `
    @if (preview().warnings.length > 0) {
      <section aria-label="Columns that deserve a look">
        <h3>Deserve a look</h3>
        <ul>
          @for (warning of preview().warnings; track $index) {
            <li>{{ warning.message }}</li>
          }
        </ul>
      </section>
    }
    <section aria-label="First rows">
      <h3>First rows</h3>
      <ts-table
        caption="First rows of the file"
        [columns]="columns()"
        [rows]="preview().rows"
        [identify]="byRecord"
        [copyable]="false"
      />
      @if (!preview().looked.whole) {
        <p class="ts-caption">Judged from the first {{ looked() }} rows; the whole file is checked when it is read.</p>
      }
    </section>
  `,
  styles: `
    :host,
    section {
      display: grid;
      grid-template-columns: minmax(0, 1fr);
      gap: 10px;
    }
    :host {
      gap: 24px;
    }
    ul {
      padding-left: 20px;
      max-width: 90ch;
    }
  `,
})
export class PreviewTable {
  readonly preview = input.required<Preview>();
  protected readonly looked = computed(() => count(this.preview().looked.records));
  protected readonly columns = computed<readonly Column<Row>[]>(() => {
    const { header, columns } = this.preview();
    return [
      { key: 'line', label: 'Line', kind: 'count', value: (row) => row.line },
      ...header.map((name, position): Column<Row> => ({
        key: `${position}`,
        label: name === '' ? `(column ${position + 1})` : name,
        unit: columns[position]?.kind ?? '',
        kind: columns[position]?.kind === 'numeric' ? 'number' : 'text',
        value: (row) => row.cells[position] ?? null,
        // A date stays in one piece.
        format: (row) =>
          columns[position]?.kind === 'date'
            ? (row.cells[position] ?? '').replaceAll('-', '\u2011')
            : (row.cells[position] ?? ''),
        width: 24,
      })),
    ];
  });
  protected readonly byRecord = (row: Row): string => String(row.record);
}
