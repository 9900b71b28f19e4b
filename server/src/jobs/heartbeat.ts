import { Client } from 'pg';
import type { Log } from '../logging/log';
import { Cancelled, type Held, Superseded, attemptKey } from './run-state';

const interval = 2000;

/**
 * Signs of life of one attempt, on a connection of its own: an advisory lock, which PostgreSQL drops the moment the process is gone, and a
 * time written every two seconds, which goes stale when the process is stuck. Each beat also hears whether the run was cancelled or given
 * to another attempt.
 */
export class Heartbeat {
  private client: Client | null = null;
  private timer: NodeJS.Timeout | null = null;
  private stopped = false;
  private beating: Promise<void> = Promise.resolve();

  constructor(
    private readonly url: string,
    private readonly run: Held,
    private readonly log: Log,
    private readonly abort: (reason: Error) => void,
  ) {}

  async start(): Promise<void> {
    await this.beat();
  }

  /** Beats now rather than at the next interval: used when a cancellation was heard. */
  hurry(): void {
    if (this.timer) {
      clearTimeout(this.timer);
      this.timer = null;
      void this.beat();
    }
  }

  async stop(): Promise<void> {
    this.stopped = true;
    if (this.timer) clearTimeout(this.timer);
    // A beat under way may be connecting: its connection would outlive the attempt, and keep a process that has nothing else to do.
    await this.beating;
    await this.client?.end().catch(() => undefined);
  }

  private beat(): Promise<void> {
    return (this.beating = this.beatNow());
  }

  private async beatNow(): Promise<void> {
    try {
      this.client ??= await this.connect();
      const { rows } = await this.client.query<{ state: string; attempt: number; ended_at: Date | null }>(
        `WITH beat AS (UPDATE run_attempts SET heartbeat_at = clock_timestamp() WHERE run_id = $1 AND number = $2 AND ended_at IS NULL RETURNING number)
         SELECT r.state, r.attempt FROM runs r, beat WHERE r.id = $1`,
        [this.run.id, this.run.attempt],
      );
      const now = rows[0];
      if (!now || now.attempt !== this.run.attempt) this.abort(new Superseded('Another attempt does this work'));
      else if (now.state === 'cancelling') this.abort(new Cancelled('The run was cancelled'));
    } catch (error) {
      // The database is away for a moment: the next beat connects again. If it stays away, another attempt will begin and fence this one.
      this.log.warn({ err: error, runId: this.run.id }, 'a heartbeat failed');
      await this.client?.end().catch(() => undefined);
      this.client = null;
    }
    if (!this.stopped) this.timer = setTimeout(() => void this.beat(), interval);
  }

  private async connect(): Promise<Client> {
    const client = new Client({
      connectionString: this.url,
      application_name: 'tallystone-attempt',
      connectionTimeoutMillis: 4000,
      query_timeout: 4000,
    });
    client.on('error', () => {
      if (this.client === client) this.client = null;
    });
    await client.connect();
    await client.query(`SELECT pg_try_advisory_lock(${attemptKey})`, [this.run.id, String(this.run.attempt)]);
    return client;
  }
}
