import { ChangeDetectionStrategy, Component, effect, inject, input } from '@angular/core';
import { Router } from '@angular/router';
import { ProblemList } from '../../../ui/problem-list';
import { oneSample } from '../data/samples';

/** Leads to the page of the sample on which the work stands. */
@Component({
  selector: 'ts-sample-home',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { class: 'ts-page' },
  imports: [ProblemList],
  template: `<ts-problems [error]="sample.error()" next="Go back to the list of samples." />`,
})
export class SampleHome {
  private readonly router = inject(Router);
  readonly modelId = input.required<string>();
  readonly sampleId = input.required<string>();
  protected readonly sample = oneSample(
    () => this.modelId(),
    () => this.sampleId(),
  );

  constructor() {
    effect(() => {
      if (!this.sample.hasValue()) return;
      const { state, definitions } = this.sample.value();
      const page = state !== 'ready' ? 'reading' : definitions > 0 ? 'definition' : 'columns';
      void this.router.navigate(['/models', this.modelId(), 'sample', this.sampleId(), page], { replaceUrl: true });
    });
  }
}
