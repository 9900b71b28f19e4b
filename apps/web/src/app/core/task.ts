import { signal } from '@angular/core';

/**
 * One thing a page does on the server: whether it is under way, and what it rejected with. While it is under way a second press does
 * nothing.
 *
 * @example
 * protected readonly saving = new Task();
 * protected save(): void { void this.saving.run(() => this.models.save(this.form.getRawValue())); }
 * // <ts-problems [error]="saving.error()" />  <button [disabled]="saving.busy()">
 */
export class Task {
  private readonly underWay = signal(false);
  private readonly failure = signal<unknown>(null);
  readonly busy = this.underWay.asReadonly();
  readonly error = this.failure.asReadonly();

  /** Resolves to what the work gave, or to undefined when it rejected (see `error`) or was under way already. */
  async run<T>(work: () => Promise<T>): Promise<T | undefined> {
    if (this.underWay()) return undefined;
    this.underWay.set(true);
    this.failure.set(null);
    try {
      return await work();
    } catch (error) {
      this.failure.set(error);
      return undefined;
    } finally {
      this.underWay.set(false);
    }
  }

  clear(): void {
    this.failure.set(null);
  }
}
