import type { FoldBatch } from './fold-batch';
import { joinMachine, type Machine } from './kernels/kernels';

/**
 * Threads that work on one memory together. Which thread does which piece never shows in the results: a piece writes to a place of its own, and pieces
 * are summed in their order afterwards.
 */
export interface Crew {
  /** Threads beside the caller. */
  readonly helpers: number;
  /** Takes up work in a machine's memory. */
  join(machine: Machine, at: CrewPlaces): void;
  /** Does pieces 0 to count - 1 and returns when all are done. */
  run(work: Work, description: number, count: number): void;
  /** Lets the helpers go; the memory may be forgotten. */
  leave(): void;
  /** Sends folds to another thread, which calls `helpFolds` with them; absent = there is none for that. */
  readonly delegate?: (batch: FoldBatch) => void;
}

export type Work = 'pass32' | 'pass64' | 'gram';
const WORKS: readonly Work[] = ['pass32', 'pass64', 'gram'];

/** Where a machine's memory holds what threads agree by, and their scratch, one after the other. */
export interface CrewPlaces {
  readonly control: number;
  readonly scratch: number;
  readonly scratchBytes: number;
}

/**
 * The caller alone on its passes. Of a small problem, whose passes are over before another thread has woken, that other thread may do folds as a whole.
 * @example new Alone((batch) => worker.postMessage(batch))
 */
export class Alone implements Crew {
  readonly helpers = 0;
  private machine: Machine | null = null;
  private scratch = 0;

  constructor(readonly delegate?: (batch: FoldBatch) => void) {}

  join(machine: Machine, at: CrewPlaces): void {
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

/** What a helping thread is sent: all that it needs, and nothing that cannot be sent. */
export interface HelpOrder {
  readonly shared: unknown;
  readonly control: number;
  readonly scratch: number;
}

// Words of the control area. CLAIM holds the number of the round above the next piece, so that a late thread cannot take a piece of another round.
const CLAIM = 0;
const COUNT = 1;
const WORK = 2;
const DESCRIPTION = 3;
const DONE = 4;
const ROUND = 5;
const CLOSED = 6;
const HELPED = 7;
const PIECE_BITS = 16;
const PIECE_MASK = 0xffff;
const ROUNDS = 0x7fff;

/** Looks before a thread sleeps: waking takes longer than most rounds' gaps. */
const LOOKS = 200;
const PATIENCE_MS = 60_000;

/**
 * The caller with helping threads over shared memory. A helper that is late (it may still be starting) leaves its share to the others.
 * @example const crew = new Team([(order) => worker.postMessage(order)])
 */
export class Team implements Crew {
  private machine: Machine | null = null;
  private words: Int32Array = new Int32Array(8);
  private first = 0;
  private scratch = 0;
  private round = 0;
  private piecesHelped = 0;

  /** @param send hands an order to a helping thread, which calls `help` with it */
  constructor(private readonly send: readonly ((order: HelpOrder) => void)[]) {}

  get helpers(): number {
    return this.send.length;
  }

  join(machine: Machine, at: CrewPlaces): void {
    this.leave();
    this.machine = machine;
    this.words = new Int32Array(machine.buffer);
    this.first = at.control >> 2;
    this.scratch = at.scratch;
    this.round = 0;
    // Where memory is not shared (plain kernels), the caller works alone.
    if (machine.shared === null) return;
    this.send.forEach((send, k) =>
      send({ shared: machine.shared, control: at.control, scratch: at.scratch + (k + 1) * at.scratchBytes }),
    );
  }

  run(work: Work, description: number, count: number): void {
    const { machine, words, first } = this;
    if (!machine) throw new Error('The crew has no machine.');
    this.round = (this.round + 1) & ROUNDS;
    Atomics.store(words, first + COUNT, count);
    Atomics.store(words, first + WORK, WORKS.indexOf(work));
    Atomics.store(words, first + DESCRIPTION, description);
    Atomics.store(words, first + DONE, 0);
    Atomics.store(words, first + CLAIM, this.round << PIECE_BITS);
    Atomics.store(words, first + ROUND, this.round);
    if (machine.shared !== null) Atomics.notify(words, first + ROUND);
    takePieces(machine, words, first, this.round, this.scratch);
    for (let looks = 0; ; looks++) {
      const done = Atomics.load(words, first + DONE);
      if (done === count) return;
      if (looks < LOOKS) continue;
      if (Atomics.wait(words, first + DONE, done, PATIENCE_MS) === 'timed-out')
        throw new Error('A helping thread took a piece of work and never gave it back.');
    }
  }

  /** Pieces that helpers have done in the work that is finished. */
  get helped(): number {
    return this.piecesHelped;
  }

  leave(): void {
    if (this.machine && this.machine.shared !== null) {
      this.piecesHelped += Atomics.load(this.words, this.first + HELPED);
      Atomics.store(this.words, this.first + CLOSED, 1);
      Atomics.store(this.words, this.first + ROUND, -1);
      Atomics.notify(this.words, this.first + ROUND);
    }
    this.machine = null;
  }
}

/**
 * The work of a helping thread: pieces of round after round, until its crew leaves. It returns only then.
 * @throws where WebAssembly may not run, which its crew would not have asked of it
 * @example parentPort.on('message', (order) => help(order))
 */
export function help(order: HelpOrder): void {
  const machine = joinMachine(order.shared);
  const words = new Int32Array(machine.buffer);
  const first = order.control >> 2;
  let seen = 0;
  while (Atomics.load(words, first + CLOSED) === 0) {
    const round = Atomics.load(words, first + ROUND);
    if (round === seen) {
      let looks = 0;
      while (looks < LOOKS && Atomics.load(words, first + ROUND) === seen) looks++;
      if (looks === LOOKS) Atomics.wait(words, first + ROUND, seen);
      continue;
    }
    seen = round;
    const pieces = takePieces(machine, words, first, round, order.scratch);
    if (pieces > 0) Atomics.add(words, first + HELPED, pieces);
  }
}

/** Does pieces of a round until none is left, or another round has begun; returns how many. */
function takePieces(machine: Machine, words: Int32Array, first: number, round: number, scratch: number): number {
  let pieces = 0;
  while (true) {
    const claim = Atomics.load(words, first + CLAIM);
    if (claim >>> PIECE_BITS !== round) return pieces;
    const piece = claim & PIECE_MASK;
    const count = Atomics.load(words, first + COUNT);
    const work = Atomics.load(words, first + WORK);
    const description = Atomics.load(words, first + DESCRIPTION);
    if (piece >= count) return pieces;
    if (Atomics.compareExchange(words, first + CLAIM, claim, claim + 1) !== claim) continue;
    machine.kernels[WORKS[work]](description, piece, scratch);
    pieces++;
    if (Atomics.add(words, first + DONE, 1) + 1 === count) Atomics.notify(words, first + DONE);
  }
}
