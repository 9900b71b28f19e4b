import { ChangeDetectionStrategy, Component, DestroyRef, computed, effect, inject, input, linkedSignal, signal } from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { MatButtonModule } from '@angular/material/button';
import { Router, RouterLink } from '@angular/router';
import type { Fit, NewChoice } from '@tallystone/contracts/fits/schema';
import { filter } from 'rxjs';
import { CurrentModel } from '../../../core/current-model';
import { Runs } from '../../../core/events/runs';
import { type Tagged } from '../../../core/http/etag';
import { Ask } from '../../../ui/ask';
import { type Column } from '../../../ui/column';
import { DecisionNotice } from '../../../ui/decision-notice';
import { FigureFrame, type FigureTable } from '../../../ui/figure-frame';
import { plural, significant } from '../../../ui/numbers';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { RunProgress } from '../../../ui/run-progress';
import { Tombstone } from '../../../ui/tombstone';
import { Fits } from '../data/fits';
import { AtPenalty } from '../ui/at-penalty';
import { PathFigure } from '../ui/path-figure';
import { correctionWords, decisionAt, inferenceWords, pathFinding, pathTitle, ruleAt } from '../ui/path-view';

interface PathRow {
  readonly index: number;
  readonly lambda: number;
  readonly kept: number;
  readonly mean: number;
  readonly standardError: number;
  readonly coefficients: readonly number[];
}

const ruleNames = {
  minimum: 'minimum-deviance rule',
  'one-standard-error': 'one-standard-error rule',
  'by hand': 'by hand',
} as const;

/** One fit: its penalty path in the three-part figure, the scorecard under the notch, and the choice. The notch's place is in the URL. */
@Component({
  selector: 'ts-fit-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, RouterLink, AtPenalty, DecisionNotice, FigureFrame, PageHeader, PathFigure, ProblemList, RunProgress, Tombstone],
  templateUrl: './fit-page.html',
  styles: `
    .decision,
    .chosen,
    .act {
      margin-top: 16px;
    }
    .act {
      margin-bottom: 24px;
    }
    .caution {
      max-width: 90ch;
    }
  `,
})
export class FitPage {
  private readonly fits = inject(Fits);
  private readonly runs = inject(Runs);
  private readonly ask = inject(Ask);
  private readonly router = inject(Router);
  private readonly current = inject(CurrentModel);

  readonly fitId = input.required<string>();
  /** From the URL: which penalty, counted from 1. */
  readonly penalty = input<string | undefined>(undefined);

  private readonly tagged = signal<Tagged<Fit> | null>(null);
  protected readonly problem = signal<unknown>(null);
  protected readonly saving = signal<unknown>(null);
  protected readonly fit = computed(() => this.tagged()?.value ?? null);
  protected readonly run = this.runs.run(() => this.fit()?.runId);
  protected readonly path = this.fits.path(() => (this.fit()?.state === 'ready' ? this.fitId() : null));
  private readonly list = this.fits.list(() => this.fit()?.modelId ?? this.current.id() ?? '');

  protected readonly pathValue = computed(() => (this.path.hasValue() ? this.path.value() : null));
  protected readonly index = linkedSignal(() => {
    const path = this.pathValue();
    if (!path) return 0;
    const asked = Number(this.penalty()) - 1;
    const start = this.fit()?.choice?.index ?? path.crossValidation.oneStandardError;
    return Number.isInteger(asked) && asked >= 0 && asked < path.lambdas.length ? asked : start;
  });

  protected readonly title = computed(() => {
    const path = this.pathValue();
    return path ? pathTitle(path, this.fit()?.mixing ?? 1) : '';
  });
  protected readonly finding = computed(() => {
    const path = this.pathValue();
    return path ? pathFinding(path) : null;
  });
  protected readonly sentence = computed(() => {
    const fit = this.fit();
    if (!fit) return null;
    const words = `Fit ${fit.number} on binning “${fit.binningName}”, ${plural(fit.characteristics, 'characteristic')}, by ${fit.createdBy}.`;
    return fit.state === 'ready' && !fit.choice ? `${words} No penalty is chosen yet.` : words;
  });
  protected readonly decision = computed(() => {
    const path = this.pathValue();
    return path && !this.fit()?.erased ? decisionAt(path, this.index()) : null;
  });
  protected readonly inference = computed(() => inferenceWords(this.fit()?.inference ?? 'none'));
  protected readonly correction = computed(() => {
    const path = this.pathValue();
    return path ? correctionWords(path, this.index()) : null;
  });
  protected readonly isChosen = computed(() => this.fit()?.choice?.index === this.index());
  protected readonly compareWith = computed(() => {
    const fit = this.fit();
    if (!fit || fit.erased || !this.list.hasValue()) return null;
    const fits = this.list.value().fits;
    // The accepts-only fit first: a fit with inference is held against it.
    if (fit.acceptsOnlyId !== null) return fit.state === 'ready' ? `${fit.acceptsOnlyId},${fit.id}` : null;
    const other = fits.find((entry) => entry.state === 'ready' && entry.id !== fit.id && entry.erased === null);
    return fit.state === 'ready' && other ? `${fit.id},${other.id}` : null;
  });
  protected readonly table = computed<FigureTable<PathRow> | null>(() => {
    const path = this.pathValue();
    if (!path) return null;
    const columns: Column<PathRow>[] = [
      { key: 'lambda', label: 'Penalty', kind: 'number', value: (row) => row.lambda },
      { key: 'kept', label: 'Kept', kind: 'count', value: (row) => row.kept },
      { key: 'mean', label: 'Deviance', unit: 'cross-validated, per row', kind: 'number', decimals: 5, value: (row) => row.mean },
      { key: 'se', label: 'Standard error', kind: 'number', decimals: 5, value: (row) => row.standardError },
      ...path.characteristics.map(
        (entry, j): Column<PathRow> => ({
          key: `coefficient-${entry.column}`,
          label: entry.label,
          kind: 'number',
          decimals: 3,
          value: (row) => row.coefficients[j],
        }),
      ),
    ];
    const rows = path.lambdas.map((lambda, index) => ({
      index,
      lambda,
      kept: path.kept[index],
      mean: path.crossValidation.mean[index],
      standardError: path.crossValidation.standardError[index],
      coefficients: path.coefficients[index],
    }));
    return { columns, rows };
  });

  constructor() {
    effect(() => void this.read(this.fitId()));
    this.runs.finished
      .pipe(
        filter((run) => run.id === this.fit()?.runId),
        takeUntilDestroyed(inject(DestroyRef)),
      )
      .subscribe(() => void this.reload());
  }

  protected short(lambda: number): string {
    return significant(lambda, 2);
  }

  protected ruleName(rule: keyof typeof ruleNames): string {
    return ruleNames[rule];
  }

  protected async reload(): Promise<void> {
    await this.read(this.fitId());
    this.path.reload();
    await this.current.reload();
  }

  protected move(index: number): void {
    this.index.set(index);
    // The URL follows without a navigation of its own history entry: a shared link opens at the same penalty.
    void this.router.navigate([], { queryParams: { penalty: index + 1 }, queryParamsHandling: 'merge', replaceUrl: true });
  }

  protected async choose(): Promise<void> {
    const path = this.pathValue();
    const state = this.tagged();
    if (!path || !state) return;
    const index = this.index();
    const rule = ruleAt(path, index) ?? 'by hand';
    const answer = await this.ask.for({
      title: `Use penalty ${significant(path.lambdas[index], 2)}?`,
      text: `${plural(path.kept[index], 'characteristic')} would be kept, ${rule === 'by hand' ? 'chosen by hand' : `by the ${ruleNames[rule]}`}. The choice and its reason go into the record and the documentation.`,
      accept: 'Use this penalty',
      reason: { label: rule === 'by hand' ? 'Why this penalty' : 'Why this penalty (optional)', required: rule === 'by hand' },
    });
    if (!answer) return;
    const choice: NewChoice = { index, rule, reason: answer.reason ?? '' };
    this.saving.set(null);
    try {
      this.tagged.set(await this.fits.choose(this.fitId(), choice, state.etag));
      await this.current.reload();
    } catch (error) {
      this.saving.set(error);
    }
  }

  protected async openOutOfTime(): Promise<void> {
    const fit = this.fit();
    if (!fit) return;
    const answer = await this.ask.for({
      title: 'Open the out-of-time figures?',
      text: 'They stay open for this sample. Opening is recorded, and the documentation prints how often it happened before freezing.',
      accept: 'Open',
      reason: { label: 'Why now', required: true },
    });
    if (!answer) return;
    this.saving.set(null);
    try {
      await this.fits.openOutOfTime(fit.definitionId, answer.reason ?? '');
      await this.reload();
    } catch (error) {
      this.saving.set(error);
    }
  }

  private async read(id: string): Promise<void> {
    try {
      this.tagged.set(await this.fits.read(id));
      this.problem.set(null);
    } catch (error) {
      this.problem.set(error);
    }
  }
}
