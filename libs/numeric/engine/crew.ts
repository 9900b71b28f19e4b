import type { Machine } from './kernels/kernels';

export type Work = 'pass32' | 'pass64' | 'gram';
const WORKS: readonly Work[] = ['pass32', 'pass64', 'gram'];

interface Scratch {
  readonly control: number;
  readonly scratch: number;
  readonly scratchBytes: number;
}

/**
 * Threads that work on one memory together. Which thread does which piece never shows in the results: a piece writes to a place of its own, and pieces
 * are summed in their order afterwards.
 */
export interface Crew {
  /** Threads beside the caller. */
  readonly helpers: number;
  /** Takes up work in a machine's memory. */
  join(machine: Machine, at: Scratch): void;
  /** Does pieces 0 to count - 1 and returns when all are done. */
  run(work: Work, description: number, count: number): void;
  leave(): void;
}

/** The caller alone. */
export class Alone implements Crew {
  readonly helpers = 0;
  private machine: Machine | null = null;
  private scratch = 0;

  join(machine: Machine, at: Scratch): void {
    this.machine = machine;
    this.scratch = at.scratch;
  }

  run(work: Work, description: number, count: number): void {
    const kernel = this.machine?.kernels[work];
    for (let piece = 0; piece < count; piece++) kernel?.(description, piece, this.scratch);
  }

  leave(): void {
    this.machine = null;
  }
}
export { WORKS };
