import { ChangeDetectionStrategy, Component, DestroyRef, computed, effect, inject, input } from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { MatButtonModule } from '@angular/material/button';
import { RouterLink, RouterOutlet } from '@angular/router';
import { filter } from 'rxjs';
import { CurrentModel } from '../core/current-model';
import { Runs } from '../core/events/runs';
import { PageTitles } from '../core/navigation';
import { HEADING_LEVEL } from '../ui/heading-level';
import { ProblemList } from '../ui/problem-list';
import { WorksRule } from './works-rule';

/** The frame of one model: its name and state, the work's rule, and below it the step one is on. */
@Component({
  selector: 'ts-model-frame',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [RouterOutlet, RouterLink, MatButtonModule, ProblemList, WorksRule],
  providers: [{ provide: HEADING_LEVEL, useValue: 2 }],
  template: `
    @if (current.problem(); as problem) {
      <div class="ts-page">
        <ts-problems [error]="problem">
          <a matButton="outlined" routerLink="/models">To the models</a>
        </ts-problems>
      </div>
    } @else {
      <div class="head">
        <div class="title">
          <h1>{{ current.name() ?? '…' }}</h1>
          @if (current.model(); as model) {
            <p class="ts-second">
              <a class="number" [routerLink]="['/models', model.id]">{{ model.inventoryNumber }}</a>
              <span>{{ state() }}</span>
            </p>
          }
        </div>
        @if (!current.model() || current.can('read-content')) {
          <ts-works-rule class="ts-no-print" [steps]="current.steps()" />
        }
      </div>
      @if (current.model()) {
        <router-outlet />
      }
    }
  `,
  styles: `
    .head {
      max-width: var(--ts-page);
      margin: 0 auto;
      padding: 24px var(--ts-margin) 0;
    }
    .title {
      display: flex;
      flex-wrap: wrap;
      align-items: baseline;
      gap: 2px 16px;
      min-height: 34px;
      margin-bottom: 14px;
    }
    .title p {
      display: flex;
      gap: 12px;
    }
    .number {
      color: inherit;
    }
    ts-works-rule {
      min-height: 58px;
      margin: 0 calc(-1 * var(--ts-margin));
      padding: 0 var(--ts-margin);
    }
  `,
})
export class ModelFrame {
  readonly modelId = input.required<string>();
  protected readonly current = inject(CurrentModel);
  protected readonly state = computed(() => this.current.model()?.state.toLowerCase());

  constructor() {
    const titles = inject(PageTitles);
    effect(() => void this.current.open(this.modelId()));
    effect(() => {
      const name = this.current.name();
      if (name) titles.named(name);
    });
    // What a run has finished may be what the rule shows.
    inject(Runs)
      .finished.pipe(
        filter((run) => run.modelId === this.current.id()),
        takeUntilDestroyed(),
      )
      .subscribe(() => void this.current.reload());
    inject(DestroyRef).onDestroy(() => this.current.close());
  }
}
