import { ChangeDetectionStrategy, Component, computed, input, linkedSignal, signal } from '@angular/core';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatSelectModule } from '@angular/material/select';
import type { Stability, StabilityRow } from '@tallystone/contracts/validation/schema';
import { type Column } from '../../../ui/column';
import { ElementWidth } from '../../../ui/element-width';
import { FigureFrame, FigurePoint, type FigureTable } from '../../../ui/figure-frame';
import { binWords, fixed, share } from '../../../ui/numbers';
import { intervalChart } from './interval-rows';
import { pointsWords, stabilityFinding, unsure } from './validation-view';

type BinRow = StabilityRow['bins'][number];
const clip = (text: string, room: number): string => (text.length > room ? `${text.slice(0, room - 1)}…` : text);

/** Coefficients over resamples, one interval a characteristic; and the points of one characteristic, one interval a bin. */
@Component({
  selector: 'ts-stability-figure',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatFormFieldModule, MatSelectModule, ElementWidth, FigureFrame, FigurePoint],
  templateUrl: './stability-figure.html',
  styleUrl: './stability-figure.scss',
})
export class StabilityFigure {
  readonly stability = input.required<Stability>();

  protected readonly width = signal(780);
  protected readonly wide = computed(() => Math.max(300, this.width()));
  protected readonly narrow = computed(() => this.wide() < 560);
  protected readonly finding = computed(() => stabilityFinding(this.stability()));
  protected readonly note = computed(() => {
    const { resamples, seed, notConverged } = this.stability();
    return `${resamples} bootstrap resamples, seed ${seed}${notConverged > 0 ? `, ${notConverged} did not converge` : ''}`;
  });
  /** Those of the version first, by the size of the coefficient; then those that only resamples kept. */
  protected readonly ordered = computed(() =>
    [...this.stability().rows].sort((a, b) => Number(b.coefficient !== 0) - Number(a.coefficient !== 0) || Math.abs(b.coefficient) - Math.abs(a.coefficient) || b.selected - a.selected),
  );
  protected readonly chart = computed(() =>
    intervalChart(
      this.ordered().map((row) => ({ value: row.coefficient, lower: row.lower, upper: row.upper })),
      { left: this.narrow() ? 126 : 190, right: this.wide() - (this.narrow() ? 92 : 190), rowHeight: 26, decimals: 1 },
    ),
  );
  protected readonly rows = computed(() => {
    const { rows } = this.chart();
    return this.ordered().map((row, i) => ({
      ...rows[i],
      column: row.column,
      name: clip(row.label, this.narrow() ? 17 : 27),
      kept: row.coefficient !== 0,
      flagged: row.coefficient !== 0 && unsure(row),
      selected: share(row.selected, 0),
      sameSign: row.sameSign === null ? '' : share(row.sameSign, 0),
      spoken: `${row.label}: coefficient ${fixed(row.coefficient, 3)}, ${row.lower === null ? 'no interval' : `${fixed(row.lower, 3)} to ${fixed(row.upper, 3)}`}, kept in ${share(row.selected, 0)}, same sign ${row.sameSign === null ? 'not told' : share(row.sameSign, 0)}`,
    }));
  });
  protected readonly table = computed<FigureTable<StabilityRow>>(() => {
    const columns: Column<StabilityRow>[] = [
      { key: 'label', label: 'Characteristic', value: (row) => row.label },
      { key: 'coefficient', label: 'Coefficient', kind: 'number', decimals: 3, value: (row) => row.coefficient },
      { key: 'lower', label: 'from', unit: '2.5 %', kind: 'number', decimals: 3, value: (row) => row.lower },
      { key: 'upper', label: 'to', unit: '97.5 %', kind: 'number', decimals: 3, value: (row) => row.upper },
      { key: 'selected', label: 'Kept', unit: 'of resamples', kind: 'share', value: (row) => row.selected },
      { key: 'sameSign', label: 'Same sign', unit: 'of those', kind: 'share', value: (row) => row.sameSign },
    ];
    return { columns, rows: this.ordered() };
  });

  protected readonly choices = computed(() => this.ordered().filter((row) => row.bins.length > 0));
  protected readonly chosen = linkedSignal(() => this.choices()[0]?.column ?? '');
  private readonly bins = computed(() => this.choices().find((row) => row.column === this.chosen())?.bins ?? []);
  protected readonly binChart = computed(() =>
    intervalChart(
      this.bins().map(({ points, lower, upper }) => ({ value: points, lower, upper })),
      { left: this.narrow() ? 126 : 190, right: this.wide() - (this.narrow() ? 92 : 190), rowHeight: 26, decimals: 0 },
    ),
  );
  protected readonly binRows = computed(() => {
    const { rows } = this.binChart();
    return this.bins().map((bin, i) => ({ ...rows[i], key: `${i} ${bin.label}`, name: clip(binWords(bin.label), this.narrow() ? 19 : 27), words: pointsWords(bin), spoken: `${binWords(bin.label)}: ${pointsWords(bin)} points against neutral` }));
  });
  protected readonly binTitle = computed(() => `Points of ${this.choices().find((row) => row.column === this.chosen())?.label ?? ''} over resamples`);
  protected readonly binTable = computed<FigureTable<BinRow>>(() => {
    const columns: Column<BinRow>[] = [
      { key: 'label', label: 'Attribute', value: (row) => row.label, format: (row) => binWords(row.label) },
      { key: 'points', label: 'Points', unit: 'against neutral', kind: 'number', decimals: 1, value: (row) => row.points },
      { key: 'lower', label: 'from', unit: '2.5 %', kind: 'number', decimals: 1, value: (row) => row.lower },
      { key: 'upper', label: 'to', unit: '97.5 %', kind: 'number', decimals: 1, value: (row) => row.upper },
    ];
    return { columns, rows: this.bins() };
  });
}
