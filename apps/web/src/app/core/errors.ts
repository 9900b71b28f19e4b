import { type ErrorHandler, Injectable, inject, signal } from '@angular/core';
import { type Problem, asProblem } from './http/problem';

/** Failures nobody caught, kept for the frame to show; what happened, what was not done, and the request's id. */
@Injectable({ providedIn: 'root' })
export class Failures {
  private readonly latest = signal<Problem | null>(null);
  readonly shown = this.latest.asReadonly();

  show(error: unknown): void {
    this.latest.set(asProblem(error));
  }

  dismiss(): void {
    this.latest.set(null);
  }
}

@Injectable()
export class ShowsFailures implements ErrorHandler {
  private readonly failures = inject(Failures);

  handleError(error: unknown): void {
    const cause = error instanceof Error && 'rejection' in error ? error.rejection : error;
    const problem = asProblem(cause);
    // A 401 has already taken the person to sign-in.
    if (problem.status !== 401) this.failures.show(problem);
    if (problem.status === -1) console.error(cause);
  }
}
