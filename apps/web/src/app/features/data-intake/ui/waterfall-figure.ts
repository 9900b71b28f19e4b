import { ChangeDetectionStrategy, Component, computed, input, signal } from '@angular/core';
import type { DefinitionCounts, WaterfallStep } from '@tallystone/contracts/samples/definition';
import { scaleLinear } from 'd3-scale';
import { type Column } from '../../../ui/column';
import { ElementWidth } from '../../../ui/element-width';
import { FigureFrame, FigurePoint } from '../../../ui/figure-frame';
import { MINUS, count, plural, share } from '../../../ui/numbers';
import { badRateLeft, badRateOut, waterfallFinding, waterfallNote } from './findings';


/** From the rows of the file down to development: what each step takes out, and what is left. */
@Component({
  selector: 'ts-waterfall-figure',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [ElementWidth, FigureFrame, FigurePoint],
  template: `
    <ts-figure title="From the file to development" [finding]="finding()" [note]="note()" [table]="table()">
      <div (tsWidth)="width.set($event)">
        <svg [attr.viewBox]="'0 0 ' + width() + ' ' + height()" [attr.width]="width()" [attr.height]="height()">
          @for (bar of bars(); track bar.index) {
            <svg:text x="0" [attr.y]="bar.y + 13" class="ts-label">{{ bar.step.label }}</svg:text>
            <svg:text [attr.x]="narrow() ? 0 : width()" [attr.y]="bar.y + (narrow() ? 31 : 13)" [attr.text-anchor]="narrow() ? 'start' : 'end'">
              {{ bar.words }}
            </svg:text>
            <svg:rect
              [tsPoint]="bar.read"
              tsPointSeries="steps"
              class="left"
              x="0"
              [attr.y]="bar.y + bar.under"
              [attr.width]="bar.left"
              height="12"
            />
            @if (bar.step.out > 0) {
              <svg:rect class="out" [attr.x]="bar.left" [attr.y]="bar.y + bar.under + 0.75" [attr.width]="bar.out" height="10.5" />
              <svg:path class="notch" [attr.d]="'M' + bar.left + ' ' + (bar.y + bar.under - 2) + 'v16'" />
            }
          }
        </svg>
      </div>
    </ts-figure>
  `,
  styles: `
    .left {
      fill: var(--ts-primary);
    }
    .out {
      fill: var(--ts-sunk);
      stroke: var(--ts-ahead);
      stroke-width: 1.2;
      stroke-dasharray: 3 2;
    }
    .notch {
      stroke: var(--ts-ink);
      stroke-width: 1.6;
    }
  `,
})
export class WaterfallFigure {
  readonly counts = input.required<DefinitionCounts>();
  protected readonly width = signal(640);
  /** Where label and numbers would meet, the numbers stand under the label. */
  protected readonly narrow = computed(() => this.width() < 520);
  private readonly row = computed(() => (this.narrow() ? 62 : 44));
  protected readonly height = computed(() => this.counts().waterfall.length * this.row() + 4);
  protected readonly finding = computed(() => waterfallFinding(this.counts()));
  protected readonly note = computed(() => waterfallNote(this.counts()));

  protected readonly bars = computed(() => {
    const { waterfall } = this.counts();
    const x = scaleLinear()
      .domain([0, Math.max(1, waterfall[0]?.left ?? 1)])
      .range([0, this.width()]);
    return waterfall.map((step, index) => {
      const rate = badRateOut(step);
      const out =
        step.out > 0
          ? `${MINUS}${count(step.out)}${rate === null ? '' : `, bad rate ${share(rate)}`}`
          : step.kind === 'source' || step.kind === 'development'
            ? ''
            : 'none';
      const rateLeft = badRateLeft(step);
      const left = `${count(step.left)}${out === '' ? '' : ' left'}${rateLeft === null ? '' : `, bad rate ${share(rateLeft)}`}`;
      const words = out === '' ? left : `${out}; ${left}`;
      return {
        index,
        step,
        y: index * this.row() + 2,
        under: this.narrow() ? 37 : 19,
        left: x(step.left),
        out: Math.max(0, x(step.out)),
        words,
        read: `${step.label}: ${out === '' ? '' : `${plural(step.out, 'row')} out, `}${count(step.left)} left${rateLeft === null ? '' : `, bad rate ${share(rateLeft)}`}`,
      };
    });
  });

  protected readonly table = computed(() => {
    const columns: readonly Column<WaterfallStep>[] = [
      { key: 'step', label: 'Step', value: (step) => step.label },
      { key: 'out', label: 'Rows out', kind: 'count', value: (step) => step.out },
      { key: 'goods', label: 'Goods out', kind: 'count', value: (step) => step.outGoods },
      { key: 'bads', label: 'Bads out', kind: 'count', value: (step) => step.outBads },
      { key: 'rate', label: 'Bad rate', unit: 'out', kind: 'share', value: badRateOut },
      { key: 'left', label: 'Rows left', kind: 'count', value: (step) => step.left },
      { key: 'leftGoods', label: 'Goods left', kind: 'count', value: (step) => step.leftGoods ?? null },
      { key: 'leftBads', label: 'Bads left', kind: 'count', value: (step) => step.leftBads ?? null },
      { key: 'leftRate', label: 'Bad rate', unit: 'left', kind: 'share', value: badRateLeft },
    ];
    return { columns, rows: this.counts().waterfall };
  });
}
