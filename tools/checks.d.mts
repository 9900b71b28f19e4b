export interface Count {
  readonly passed: number;
  readonly failed: number;
  readonly skipped: number;
  readonly notes: readonly string[];
}

/** Counts a report of Vitest. */
export function countVitest(done: { readonly code: number }, report: unknown): Count;

/** Counts a report of Playwright. */
export function countPlaywright(done: { readonly code: number }, report: unknown): Count;
