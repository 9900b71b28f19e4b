import { ChangeDetectionStrategy, Component, input } from '@angular/core';
import { RouterLink, RouterLinkActive } from '@angular/router';

/** The pages of one sample, in the order of the work, with the way back to the list. */
@Component({
  selector: 'ts-sample-steps',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [RouterLink, RouterLinkActive],
  template: `
    <nav aria-label="Sample">
      <a [routerLink]="['/models', modelId(), 'sample']" class="back">All samples</a>
      <span class="file" [title]="fileName()">{{ fileName() }}</span>
      <div class="pages">
        @for (step of steps; track step.path) {
          @if (read() || step.path === 'reading') {
            <a
              [routerLink]="['/models', modelId(), 'sample', sampleId(), step.path]"
              routerLinkActive="here"
              ariaCurrentWhenActive="page"
              >{{ step.label }}</a
            >
          } @else {
            <span class="ahead">{{ step.label }}</span>
          }
        }
      </div>
    </nav>
  `,
  styles: `
    nav {
      display: flex;
      flex-wrap: wrap;
      gap: 4px 20px;
      align-items: baseline;
      justify-content: space-between;
      border-bottom: 1px solid var(--ts-hairline);
    }
    .pages {
      display: flex;
      gap: 20px;
    }
    a,
    span {
      display: block;
      padding: 6px 0;
      min-height: 24px;
    }
    .file {
      color: var(--ts-ink-2);
      max-width: 32ch;
      overflow: hidden;
      text-overflow: ellipsis;
      white-space: nowrap;
      margin-right: auto;
    }
    a.here {
      font-weight: 600;
      color: var(--ts-ink);
      text-decoration: none;
      box-shadow: inset 0 -3px 0 var(--ts-primary);
    }
    .ahead {
      color: var(--ts-ink-2);
    }
  `,
})
export class SampleSteps {
  readonly modelId = input.required<string>();
  readonly sampleId = input.required<string>();
  readonly fileName = input('');
  /** Whether the file has been read: before that there is nothing to see beyond its reading. */
  readonly read = input.required<boolean>();
  protected readonly steps = [
    { path: 'reading', label: 'Reading' },
    { path: 'columns', label: 'Columns' },
    { path: 'definition', label: 'Definition' },
    { path: 'quality', label: 'Quality' },
  ];
}
