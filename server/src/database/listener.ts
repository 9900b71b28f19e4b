import { Client } from 'pg';
import type { Log } from '../logging/log';

export const channels = {
  events: 'tallystone_events',
  queue: 'tallystone_queue',
  sessions: 'tallystone_sessions',
  cancel: 'tallystone_cancel',
  parts: 'tallystone_parts',
} as const;
export type Channel = (typeof channels)[keyof typeof channels];

type Hear = (payload: string) => void;

/**
 * One connection that LISTENs. When it is lost it comes back by itself; since a NOTIFY may have been missed meanwhile, everyone who listens
 * is told to look for themselves (`onReconnect`).
 */
export class Listener {
  private client: Client | null = null;
  private closed = false;
  private readonly hearers = new Map<Channel, Set<Hear>>();
  private readonly reconnected = new Set<() => void>();

  constructor(
    private readonly url: string,
    private readonly log: Log,
  ) {}

  async open(): Promise<void> {
    const client = new Client({
      connectionString: this.url,
      application_name: 'tallystone-listen',
      keepAlive: true,
      connectionTimeoutMillis: 5000,
    });
    client.on('notification', ({ channel, payload }) => {
      for (const hear of this.hearers.get(channel as Channel) ?? []) hear(payload ?? '');
    });
    client.on('error', () => this.lost(client));
    client.on('end', () => this.lost(client));
    await client.connect();
    for (const channel of Object.values(channels)) await client.query(`LISTEN ${channel}`);
    this.client = client;
  }

  /** Hears a channel until the returned function is called. */
  on(channel: Channel, hear: Hear): () => void {
    const hearers = this.hearers.get(channel) ?? new Set<Hear>();
    this.hearers.set(channel, hearers.add(hear));
    return () => void hearers.delete(hear);
  }

  onReconnect(look: () => void): () => void {
    this.reconnected.add(look);
    return () => void this.reconnected.delete(look);
  }

  async close(): Promise<void> {
    this.closed = true;
    const client = this.client;
    this.client = null;
    await client?.end().catch(() => undefined);
  }

  private lost(client: Client): void {
    if (this.closed || this.client !== client) return;
    this.client = null;
    this.log.warn('the listening connection was lost; connecting again');
    void this.again();
  }

  private async again(): Promise<void> {
    while (!this.closed && !this.client) {
      await new Promise((resolve) => setTimeout(resolve, 500));
      await this.open().catch(() => undefined);
    }
    if (!this.closed) for (const look of this.reconnected) look();
  }
}
