import { ChangeDetectionStrategy, Component, computed, inject, input, viewChild } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { RouterLink } from '@angular/router';
import type { Version } from '@tallystone/contracts/versions/schema';
import { CurrentModel } from '../../../core/current-model';
import { warnBeforeUnload } from '../../../core/unsaved-changes';
import { fixed, significant } from '../../../ui/numbers';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { StatusMark } from '../../../ui/status-mark';
import { Tombstone } from '../../../ui/tombstone';
import { stateTone } from '../../../ui/version-state';
import { Versions } from '../data/versions';
import { GateList } from '../ui/gate-list';
import { LifeLine } from '../ui/life-line';
import { TextsEditor } from './texts-editor';
import { VersionActs } from './version-acts';
import { gateAhead, versionFinding } from '../ui/version-view';

/** One version: its state and life, what stands before its next act, the author's texts, and the hashes it can be told by. */
@Component({
  selector: 'ts-version-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, RouterLink, GateList, LifeLine, PageHeader, ProblemList, StatusMark, TextsEditor, Tombstone, VersionActs],
  templateUrl: './version-page.html',
  styleUrl: './version-page.scss',
})
export class VersionPage {
  private readonly versions = inject(Versions);
  private readonly current = inject(CurrentModel);
  readonly modelId = input.required<string>();
  readonly versionId = input.required<string>();

  private readonly texts = viewChild(TextsEditor);
  readonly unsaved = computed(() => this.texts()?.unsaved() ?? false);
  protected readonly resource = this.versions.one(() => this.versionId());
  protected readonly version = computed(() => (this.resource.hasValue() ? this.resource.value() : null));
  protected readonly title = computed(() => {
    const version = this.version();
    return version ? `Version ${version.number}` : 'Version';
  });
  protected readonly finding = computed(() => {
    const version = this.version();
    return version ? versionFinding(version) : null;
  });
  protected readonly tone = computed(() => stateTone(this.version()?.state ?? 'In development'));
  protected readonly gate = computed(() => {
    const version = this.version();
    return version ? gateAhead(version) : null;
  });
  protected readonly here = computed(() => `/models/${this.modelId()}/version/${this.versionId()}`);
  protected readonly hashes = computed(() => {
    const version = this.version();
    if (!version) return [];
    return [
      { label: 'Fingerprint of the version', text: version.fingerprint },
      { label: 'Specification', text: version.specificationSha256 },
      { label: 'Result', text: version.resultSha256 },
      { label: 'Data file', text: version.dataSha256 },
    ];
  });
  protected readonly facts = computed(() => {
    const version = this.version();
    return version ? `Intercept ${fixed(version.intercept, 6)}, penalty ${significant(version.lambda, 4)}, code ${version.codeVersion}` : '';
  });

  constructor() {
    warnBeforeUnload(() => this.unsaved());
  }

  protected acted(version: Version): void {
    this.resource.set(version);
    void this.current.reload();
  }

  /** A gate may look at the texts. */
  protected textsSaved(): void {
    this.resource.reload();
  }
}
