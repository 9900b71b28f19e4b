import { ChangeDetectionStrategy, Component, Injector, computed, inject, input, output } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { RouterLink } from '@angular/router';
import type { NewAct, Version } from '@tallystone/contracts/versions/schema';
import { firstValueFrom } from 'rxjs';
import { Task } from '../../../core/task';
import { Ask } from '../../../ui/ask';
import { DecisionNotice } from '../../../ui/decision-notice';
import { ProblemList } from '../../../ui/problem-list';
import { Versions } from '../data/versions';
import { gateAhead, missing } from '../ui/version-view';

/** What this person may do with a version now, and why not where they might expect to. The one thing to decide on the page. */
@Component({
  selector: 'ts-version-acts',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, RouterLink, DecisionNotice, ProblemList],
  template: `
    @if (words(); as words) {
      <ts-decision>
        {{ words }}
        @if (may('submit')) {
          <button tsDecide matButton="filled" type="button" [disabled]="acting.busy() || gaps() > 0" (click)="submit()">Submit for validation</button>
        }
        @if (may('start')) {
          <button tsDecide matButton="filled" type="button" [disabled]="acting.busy()" (click)="start()">Take into validation</button>
        }
        @if (may('conclude')) {
          <a tsDecide matButton="outlined" [routerLink]="['/models', version().modelId, 'validation', version().id]">Tests</a>
        }
        @if (may('conclude')) {
          <button tsDecide matButton="filled" type="button" [disabled]="acting.busy() || gaps() > 0" (click)="conclude()">Conclude and sign</button>
        }
        @if (may('accept')) {
          <button tsDecide matButton="filled" type="button" [disabled]="acting.busy() || gaps() > 0" (click)="accept()">Accept and sign</button>
        }
        @if (may('return')) {
          <button tsDecide matButton="outlined" type="button" [disabled]="acting.busy()" (click)="giveBack()">Return for texts</button>
        }
        @if (may('withdraw')) {
          <button tsDecide matButton type="button" [disabled]="acting.busy()" (click)="withdraw()">Withdraw</button>
        }
      </ts-decision>
    }
    @for (refusal of refusals(); track refusal) {
      <p class="ts-second refusal">{{ refusal }}</p>
    }
    @if (acting.error(); as error) {
      <ts-problems [error]="error" />
    }
  `,
  styles: `
    :host {
      display: grid;
      gap: 12px;
    }
    :host(:empty) {
      display: none;
    }
  `,
})
export class VersionActs {
  private readonly versions = inject(Versions);
  private readonly ask = inject(Ask);
  private readonly injector = inject(Injector);
  readonly version = input.required<Version>();
  readonly acted = output<Version>();

  protected readonly acting = new Task();
  protected readonly gaps = computed(() => {
    const gate = gateAhead(this.version());
    return gate ? missing(gate).length : 0;
  });
  protected readonly refusals = computed(() => [...new Set(Object.values(this.version().refusals))]);
  protected readonly words = computed(() => decisionOf(this.version(), this.gaps()));

  protected may(act: Version['abilities'][number]): boolean {
    return this.version().abilities.includes(act);
  }

  protected submit(): Promise<void> {
    return this.asked('submit', {
      title: 'Submit for validation?',
      text: 'A validator who took no part in the development takes it from here. You can withdraw it until they conclude.',
      accept: 'Submit',
      reason: { label: 'To the validator (optional)', required: false },
    });
  }

  protected start(): Promise<void> {
    return this.asked('start', {
      title: 'Take this version into validation?',
      text: 'You become its validator. Whoever developed, fitted or submitted it could not.',
      accept: 'Take it',
      reason: { label: 'Scope of the validation (optional)', required: false },
    });
  }

  protected withdraw(): Promise<void> {
    return this.asked('withdraw', {
      title: 'Withdraw this version?',
      text: 'It goes back into development. The record keeps that it was submitted.',
      accept: 'Withdraw',
      reason: { label: 'Why it is withdrawn', required: true },
    });
  }

  protected accept(): Promise<void> {
    return this.asked('accept', {
      title: 'Accept the documentation and sign?',
      text: 'This is the second signature: it approves the version and closes its texts. The law that applies to the lender governs; qualified legal, compliance and validation staff decide.',
      accept: 'Sign',
      reason: { label: 'What is accepted', required: true },
    });
  }

  protected giveBack(): Promise<void> {
    return this.asked('return', {
      title: 'Return it for its texts?',
      text: 'The modeller can change texts only; data, fit and points stay as frozen.',
      accept: 'Return',
      reason: { label: 'What the texts still need', required: true },
    });
  }

  protected async conclude(): Promise<void> {
    const [{ MatDialog }, { ConcludeDialog }] = await Promise.all([import('@angular/material/dialog'), import('../ui/conclude-dialog')]);
    const dialog = this.injector.get(MatDialog).open<InstanceType<typeof ConcludeDialog>, never, NewAct>(ConcludeDialog, { width: '600px' });
    const act = await firstValueFrom(dialog.afterClosed());
    if (act) await this.send(act);
  }

  private async asked(act: 'submit' | 'start' | 'withdraw' | 'accept' | 'return', question: Parameters<Ask['for']>[0]): Promise<void> {
    const answer = await this.ask.for(question);
    if (answer) await this.send({ act, statement: answer.reason ?? '' });
  }

  private async send(act: NewAct): Promise<void> {
    const version = await this.acting.run(() => this.versions.act(this.version().id, act));
    if (version) this.acted.emit(version);
  }
}

/** What stands before this person to decide; null where it is somebody else's turn. */
export function decisionOf(version: Version, gaps: number): string | null {
  const may = (act: Version['abilities'][number]): boolean => version.abilities.includes(act);
  const first = gaps === 0 ? null : `First ${gaps === 1 ? 'the one thing' : `the ${gaps} things`} missing below.`;
  if (may('submit')) return first ?? 'Everything a submission needs is there. Submit it, and a validator takes over.';
  if (may('start')) return 'It is submitted and waits for a validator.';
  if (may('conclude')) return first ?? 'A matching replication is recorded. Conclude when the tests have said what you need to know.';
  if (may('accept')) return first ?? 'The validator has concluded. Read the documentation, then accept it or return it for its texts.';
  if (may('withdraw')) return `It waits for ${version.waitingFor ?? 'others'}. Until the validator concludes you can take it back.`;
  return null;
}
