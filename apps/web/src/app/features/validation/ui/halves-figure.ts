import { ChangeDetectionStrategy, Component, computed, input, signal } from '@angular/core';
import type { HalvesRow, Replication } from '@tallystone/contracts/validation/schema';
import { type Column } from '../../../ui/column';
import { ElementWidth } from '../../../ui/element-width';
import { FigureFrame, FigurePoint, type FigureTable } from '../../../ui/figure-frame';
import { binWords, moment } from '../../../ui/numbers';
import { halvesLayout, modellersHalf, openingAt, standOff, validatorsHalf } from './halves-geometry';
import { halfNumber, halvesFinding, meetWords, methodName, shownRows } from './validation-view';

/** "average_balance_6m, -244 to under 42: points" with the numbers of the bin as they are read. */
const labelWords = (label: string): string => label.replace(/^([^,]+, )(.+)(: points)$/, (_, of: string, bin: string, what: string) => of + binWords(bin) + what);

/** The two halves: one row a number; notched edges that meet where the numbers meet, and stand off, in ochre, where they do not. */
@Component({
  selector: 'ts-halves-figure',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [ElementWidth, FigureFrame, FigurePoint],
  template: `
    <div (tsWidth)="width.set($event)">
      <ts-figure title="The two halves" [finding]="finding()" [table]="table()">
        <svg [attr.viewBox]="'0 0 ' + layout().width + ' ' + (layout().height + 24)" [attr.width]="layout().width" [attr.height]="layout().height + 24">
          <svg:text x="1" y="13">{{ layout().narrow ? 'Modeller' : 'Modeller’s half, as frozen' }}</svg:text>
          <svg:text class="end" [attr.x]="layout().width - 1" y="13">{{ layout().narrow ? 'Replication' : replicated() }}</svg:text>
          <svg:g transform="translate(0,24)">
            <svg:path class="half" [attr.d]="left()" />
            <svg:path class="half" [attr.d]="right()" />
            @for (row of rows(); track row.place) {
              <svg:g [tsPoint]="row.spoken" tsPointSeries="numbers" [class.off]="!row.meets">
                <svg:rect class="reach" x="2" [attr.y]="row.y - layout().rowHeight / 2" [attr.width]="layout().width - 4" [attr.height]="layout().rowHeight" />
                @if (row.opening) {
                  <svg:path class="opening" [attr.d]="row.opening" />
                }
                @if (layout().narrow) {
                  <svg:text class="ts-label" x="10" [attr.y]="row.y - 5">{{ row.short }}</svg:text>
                  <svg:text class="number end" [attr.x]="layout().split - 12" [attr.y]="row.y + 15">{{ row.modeller }}</svg:text>
                  <svg:text class="words end" [attr.x]="layout().width - 10" [attr.y]="row.y - 5">{{ row.words }}</svg:text>
                  <svg:text class="number" [attr.x]="row.numberX" [attr.y]="row.y + 15">{{ row.validator }}</svg:text>
                } @else {
                  <svg:text class="ts-label" x="18" [attr.y]="row.y + 4">{{ row.short }}</svg:text>
                  <svg:text class="number end" [attr.x]="layout().split - 22" [attr.y]="row.y + 4">{{ row.modeller }}</svg:text>
                  <svg:text class="number" [attr.x]="row.numberX" [attr.y]="row.y + 4">{{ row.validator }}</svg:text>
                  <svg:text class="words end" [attr.x]="layout().width - 18" [attr.y]="row.y + 4">{{ row.words }}</svg:text>
                }
              </svg:g>
            }
          </svg:g>
        </svg>
      </ts-figure>
      @if (pointRows() > 0) {
        <button type="button" class="more" [attr.aria-expanded]="all()" (click)="all.set(!all())">
          {{ all() ? 'Intercept, penalty and coefficients only' : 'Show points too (' + pointRows() + ')' }}
        </button>
      }
    </div>
  `,
  styles: `
    :host {
      display: block;
      min-width: 0;
    }
    svg {
      display: block;
    }
    .half {
      fill: var(--ts-surface);
      stroke: var(--ts-primary);
      stroke-width: 1.6;
      stroke-linejoin: round;
    }
    .reach {
      fill: transparent;
    }
    .opening {
      fill: none;
      stroke: var(--ts-ochre-mark);
      stroke-width: 2.6;
      stroke-linejoin: round;
    }
    .number {
      fill: var(--ts-ink);
    }
    .end {
      text-anchor: end;
    }
    .off .words,
    .off .number {
      fill: var(--ts-ochre);
      font-weight: 600;
    }
    .ts-point:focus-visible {
      outline: none;
    }
    .ts-point:focus-visible .reach {
      stroke: var(--ts-primary);
      stroke-width: 2;
    }
    .more {
      all: unset;
      cursor: pointer;
      color: var(--ts-primary);
      font-size: 13px;
      line-height: 24px;
    }
    .more:hover {
      text-decoration: underline;
    }
    .more:focus-visible {
      outline: 2px solid var(--ts-primary);
      outline-offset: 2px;
    }
  `,
})
export class HalvesFigure {
  readonly replication = input.required<Replication>();

  protected readonly width = signal(780);
  protected readonly all = signal(false);
  private readonly shown = computed(() => shownRows(this.replication().rows, this.all() ? 'all' : 'coefficients'));
  protected readonly pointRows = computed(() => this.replication().rows.length - shownRows(this.replication().rows, 'coefficients').length);
  protected readonly finding = computed(() => halvesFinding(this.replication()));
  protected readonly replicated = computed(() => {
    const { method, by, at } = this.replication();
    return `The other half: ${methodName(method)}, ${by}, ${moment(at)}`;
  });
  protected readonly layout = computed(() => halvesLayout(this.shown(), Math.max(300, this.width())));
  protected readonly left = computed(() => modellersHalf(this.layout()));
  protected readonly right = computed(() => validatorsHalf(this.layout()));
  protected readonly rows = computed(() => {
    const layout = this.layout();
    const room = layout.narrow ? Math.floor((layout.split - 24) / 6.6) : Math.floor((layout.split - 130) / 6.8);
    return this.shown().map((row, i) => {
      const place = layout.rows[i];
      const words = meetWords(row);
      const label = labelWords(row.label);
      return {
        place: row.place,
        meets: row.meets,
        y: place.y,
        short: label.length > room ? `${label.slice(0, room - 1)}…` : label,
        modeller: halfNumber(row.modeller),
        validator: halfNumber(row.validator),
        words,
        numberX: layout.split + layout.gap + (row.meets ? 0 : standOff) + (layout.narrow ? 16 : 24),
        opening: row.meets ? null : openingAt(layout, place),
        spoken: `${label}: ${halfNumber(row.modeller)} and ${halfNumber(row.validator)}, ${words}`,
      };
    });
  });
  protected readonly table = computed<FigureTable<HalvesRow>>(() => {
    const columns: Column<HalvesRow>[] = [
      { key: 'label', label: 'Number', value: (row) => row.label },
      { key: 'modeller', label: 'Modeller', kind: 'number', value: (row) => row.modeller, format: (row) => halfNumber(row.modeller) },
      { key: 'validator', label: 'Replication', kind: 'number', value: (row) => row.validator, format: (row) => halfNumber(row.validator) },
      { key: 'difference', label: 'Difference', kind: 'number', value: (row) => row.difference },
      { key: 'tolerance', label: 'Allowed', kind: 'number', value: (row) => row.tolerance },
      { key: 'meets', label: 'Meets', value: (row) => row.meets },
      { key: 'place', label: 'Place in the result', value: (row) => row.place },
    ];
    return { columns, rows: this.replication().rows };
  });
}
