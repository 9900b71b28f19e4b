/** One message of a server-sent-event stream (WHATWG HTML, section 9.2: server-sent events). */
export interface StreamMessage {
  readonly id: string | null;
  readonly event: string;
  readonly data: string;
  readonly retryMs: number | null;
}

/**
 * Reads server-sent events from text that arrives in pieces of any size. Returns the messages completed by each piece; comment lines
 * (heartbeats) yield none.
 *
 * @example
 * const parser = new EventParser();
 * parser.push('id: 7\nevent: run\nda'); // []
 * parser.push('ta: {}\n\n');            // [{ id: '7', event: 'run', data: '{}', retryMs: null }]
 */
export class EventParser {
  private rest = '';
  private id: string | null = null;
  private event = '';
  private data: string[] = [];
  private retryMs: number | null = null;

  /** What to come back with: an id counts even when nothing was sent with it. */
  get lastEventId(): string | null {
    return this.id;
  }

  push(piece: string): StreamMessage[] {
    const messages: StreamMessage[] = [];
    const text = this.rest + piece;
    // A CR at the very end may be the first half of CRLF: leave it for the next piece.
    const end = text.endsWith('\r') ? text.length - 1 : text.length;
    const lines = text.slice(0, end).split(/\r\n|\n|\r/);
    this.rest = (lines.pop() ?? '') + text.slice(end);
    for (const line of lines) {
      if (line === '') {
        if (this.data.length > 0) {
          messages.push({ id: this.id, event: this.event || 'message', data: this.data.join('\n'), retryMs: this.retryMs });
        }
        this.event = '';
        this.data = [];
        this.retryMs = null;
        continue;
      }
      if (line.startsWith(':')) continue;
      const colon = line.indexOf(':');
      const field = colon === -1 ? line : line.slice(0, colon);
      const value = colon === -1 ? '' : line.slice(colon + 1).replace(/^ /, '');
      if (field === 'id' && !value.includes('\0')) this.id = value;
      else if (field === 'event') this.event = value;
      else if (field === 'data') this.data.push(value);
      else if (field === 'retry' && /^\d+$/.test(value)) this.retryMs = Number(value);
    }
    return messages;
  }
}
