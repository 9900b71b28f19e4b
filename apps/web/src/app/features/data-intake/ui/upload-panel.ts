import { ChangeDetectionStrategy, Component, computed, input, output, signal } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { bytes, duration, share } from '../../../ui/numbers';

/** Seconds: what ends sooner is over before it was read. */
const shownFrom = 2;

/** What is on its way, as far as this panel shows it. */
export interface UploadView {
  readonly fileName: string;
  readonly size: number;
  readonly sent: number;
  /** Of what arrived earlier, how much was compared with the file. */
  readonly compared: number;
  readonly secondsLeft: number | null;
  readonly state: 'comparing' | 'sending' | 'waiting' | 'stopped' | 'differs' | 'failed';
}

/** Where a file is dropped or chosen, and how far it has come. The file input does everything that dropping does. */
@Component({
  selector: 'ts-upload-panel',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule],
  template: `
    @if (sending(); as view) {
      <div class="under-way" role="group" aria-label="File on its way">
        <p>
          <b>{{ view.fileName }}</b>
          <span class="ts-second"> {{ words() }}</span>
        </p>
        <div
          class="bar"
          role="progressbar"
          [attr.aria-label]="view.state === 'comparing' ? 'Compared' : 'Received'"
          aria-valuemin="0"
          aria-valuemax="100"
          [attr.aria-valuenow]="percent()"
        >
          <div class="done" [style.width.%]="percent()"></div>
        </div>
        @if (view.state === 'differs') {
          <p role="alert">
            What has arrived is not from this file as it is now: the name and the size are the same, the bytes are not. No sample
            was made of it. Begin anew, and what had arrived is thrown away; or leave it, to send the file that it came from.
          </p>
        }
        <div class="ts-actions">
          @switch (view.state) {
            @case ('comparing') {
              <button matButton type="button" (click)="stop.emit()">Stop for now</button>
            }
            @case ('differs') {
              <button matButton="filled" type="button" (click)="anew.emit()">Begin anew</button>
              <button matButton type="button" (click)="left.emit()">Leave it</button>
            }
            @default {
              @if (view.state === 'sending' || view.state === 'waiting') {
                <button matButton type="button" (click)="stop.emit()">Stop for now</button>
              } @else {
                <button matButton="outlined" type="button" (click)="goOn.emit()">Go on</button>
              }
              <button matButton type="button" (click)="dropped.emit()">Drop it</button>
            }
          }
        </div>
      </div>
    } @else {
      <div
        class="place"
        [class.over]="over()"
        (dragover)="hover($event, true)"
        (dragleave)="hover($event, false)"
        (drop)="letGo($event)"
      >
        <p>Drop a CSV file here, or choose one. Up to 1&nbsp;GiB, 1&#8239;000&#8239;000 rows and 200 columns.</p>
        <div class="ts-actions">
          <button matButton="filled" type="button" (click)="picker.click()">Choose a file</button>
        </div>
        <input
          #picker
          class="ts-hidden"
          type="file"
          tabindex="-1"
          accept=".csv,.txt,.tsv,text/csv,text/plain"
          aria-label="CSV file"
          (change)="chosen($event)"
        />
      </div>
    }
  `,
  styles: `
    .place {
      display: grid;
      gap: 12px;
      justify-items: start;
      padding: 22px 24px;
      border: 1.5px dashed var(--ts-ahead);
      border-radius: var(--ts-corner);
      background: var(--ts-surface);
    }
    .over {
      border-color: var(--ts-primary);
      background: var(--ts-primary-container);
    }
    .under-way {
      display: grid;
      gap: 10px;
      padding: 18px 0;
    }
    .bar {
      height: 8px;
      background: var(--ts-sunk);
      border: 1px solid var(--ts-ahead);
    }
    .done {
      height: 100%;
      background: var(--ts-primary);
    }
  `,
})
export class UploadPanel {
  readonly sending = input<UploadView | null>(null);
  readonly file = output<File>();
  readonly stop = output();
  readonly goOn = output();
  readonly dropped = output();
  /** Throw away what has arrived of another file, and begin with this one. */
  readonly anew = output();
  /** Send neither. */
  readonly left = output();
  protected readonly over = signal(false);

  protected readonly percent = computed(() => {
    const view = this.sending();
    if (!view) return 0;
    const [done, whole] = view.state === 'comparing' ? [view.compared, view.sent] : [view.sent, view.size];
    return whole > 0 ? Math.floor((100 * done) / whole) : 0;
  });
  protected readonly words = computed(() => {
    const view = this.sending();
    if (!view) return '';
    const part = `${bytes(view.sent)} of ${bytes(view.size)} (${share(view.size > 0 ? view.sent / view.size : 0, 0)})`;
    const left = view.secondsLeft === null || view.secondsLeft < shownFrom ? '' : `, about ${duration(view.secondsLeft)} left`;
    if (view.state === 'comparing')
      return `${bytes(view.sent)} have arrived earlier: compared with this file before it goes on, ${bytes(view.compared)} so far${left}`;
    if (view.state === 'differs') return `${bytes(view.sent)} have arrived, of another file`;
    if (view.state === 'waiting') return `${part}: the connection is away and is tried again by itself`;
    if (view.state === 'stopped') return `${part}: stopped; what has arrived is kept`;
    if (view.state === 'failed') return `${part}: not taken`;
    return part + left;
  });

  protected hover(event: DragEvent, over: boolean): void {
    event.preventDefault();
    this.over.set(over);
  }

  protected letGo(event: DragEvent): void {
    event.preventDefault();
    this.over.set(false);
    const file = event.dataTransfer?.files.item(0);
    if (file) this.file.emit(file);
  }

  protected chosen(event: Event): void {
    const picker = event.target as HTMLInputElement;
    const file = picker.files?.item(0);
    if (file) this.file.emit(file);
    // The same file can be chosen again after it was refused.
    picker.value = '';
  }
}
