import type { Context } from '../context';
import { rows } from '../database/sql';
import { inTransaction } from '../database/transaction';
import { emitRunEvent } from './run-events';
import type { Held } from './run-state';

const leastPause = 250;

/** Writes progress at most four times a second; what comes faster is overtaken by what follows. A write that fails is let go. */
export class Progress {
  private latest: { phase: string; share: number | null } | null = null;
  private writing: Promise<void> | null = null;
  private settled = false;
  private endPause: () => void = () => undefined;

  constructor(
    private readonly context: Context,
    private readonly run: Pick<Held, 'id' | 'attempt'>,
  ) {}

  say(phase: string, share: number | null): void {
    if (this.settled) return;
    this.latest = { phase, share: share === null ? null : Math.min(1, Math.max(0, share)) };
    this.writing ??= this.drain().finally(() => (this.writing = null));
  }

  /** Waits for the write under way, not for the pause behind it, and forgets what has not been written. */
  async settle(): Promise<void> {
    this.settled = true;
    this.latest = null;
    this.endPause();
    await this.writing;
  }

  private async drain(): Promise<void> {
    while (this.latest) {
      const { phase, share } = this.latest;
      this.latest = null;
      await this.write(phase, share).catch((error: unknown) =>
        this.context.log.debug({ err: error }, 'progress was not written'),
      );
      if (this.settled) return;
      await new Promise<void>((resolve) => {
        const pause = setTimeout(resolve, leastPause);
        this.endPause = () => (clearTimeout(pause), resolve());
      });
    }
  }

  private write(phase: string, share: number | null): Promise<void> {
    const { sequelize } = this.context;
    return inTransaction(sequelize, async (tx) => {
      const written = await rows(
        sequelize,
        `UPDATE runs SET phase = $3, share = $4 WHERE id = $1 AND attempt = $2 AND state = 'running' RETURNING id`,
        [this.run.id, this.run.attempt, phase, share],
        tx,
      );
      if (written.length > 0) await emitRunEvent(sequelize, tx, this.run.id);
    });
  }
}
