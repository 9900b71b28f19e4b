import { expect } from 'vitest';

/** One entry of expected/published_values_and_identities.json. */
export interface PublishedCheck {
  readonly id: string;
  readonly source: string;
  readonly verified: string;
  readonly inputs: Record<string, unknown>;
  readonly expected: Record<string, unknown>;
  /** A simulation made with the entry, where there is one. */
  readonly monte_carlo_check?: Record<string, number>;
}

/** Checks by id. Each is given the entry's inputs and expected values in the shape it states, and its simulation. */
export type Handler = (inputs: never, expected: never, simulation: Record<string, number>) => void;

export function run(handler: Handler, check: PublishedCheck): void {
  expect(check.source.length).toBeGreaterThan(0);
  handler(check.inputs as never, check.expected as never, check.monte_carlo_check ?? {});
}
