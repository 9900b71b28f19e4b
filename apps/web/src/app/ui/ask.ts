import { Injectable, Injector, inject } from '@angular/core';
import { firstValueFrom } from 'rxjs';
import type { Answer, Question } from './ask-dialog';

/**
 * Asks a person before something happens, with a reason where one is owed. Resolves to null when they think better of it. The dialog's
 * code is loaded when it is first needed.
 *
 * @example
 * const answer = await this.ask.for({ title: 'Open the out-of-time figures?', text: 'Opening is recorded and printed in the
 *   documentation.', accept: 'Open', reason: { label: 'Why now', required: true } });
 * if (answer) this.open(answer.reason);
 */
@Injectable({ providedIn: 'root' })
export class Ask {
  private readonly injector = inject(Injector);

  async for(question: Question): Promise<Answer | null> {
    const [{ MatDialog }, { AskDialog }] = await Promise.all([import('@angular/material/dialog'), import('./ask-dialog')]);
    const reference = this.injector
      .get(MatDialog)
      .open<InstanceType<typeof AskDialog>, Question, Answer>(AskDialog, { data: question, width: '520px' });
    // Closing by its button gives an empty string, by Escape undefined.
    return (await firstValueFrom(reference.afterClosed())) || null;
  }
}
