import type { Request, Response } from 'express';
import type { Context } from '../../context';
import { channels } from '../../database/listener';
import type { Actor } from '../../models/person';
import { readSignedIn } from '../../services/session/read-signed-in';
import { eventsAfter, latestEventId } from '../../services/runs/events';

const beatEvery = 15_000;
/** Bytes waiting for a reader beyond which they are cut off; they come back and replay from where they were. */
const mostWaiting = 1024 * 1024;

/**
 * Streams the events of one person's runs until they go away, their session ends or the server stops. Reads the database whenever it is
 * notified, from the last event sent: what is notified twice is sent once, and what was missed is made good by the next look.
 */
export async function streamTo(context: Context, person: Actor, request: Request, response: Response): Promise<void> {
  const asked = Number(request.headers['last-event-id']);
  let last =
    Number.isSafeInteger(asked) && asked >= 0 && request.headers['last-event-id'] !== undefined
      ? asked
      : await latestEventId(context.sequelize, person.id);
  const sessionId = request.sessionID;
  response.writeHead(200, { 'Content-Type': 'text/event-stream', 'Cache-Control': 'no-store', 'X-Accel-Buffering': 'no' });
  // The first line opens the stream at once, with the id to come back with.
  response.write(`retry: 2000\nid: ${last}\n: open\n\n`);

  let closed = false;
  let looking: Promise<void> = Promise.resolve();
  const look = (): void => {
    looking = looking.then(send).catch(() => undefined);
  };
  const send = async (): Promise<void> => {
    while (!closed) {
      const events = await eventsAfter(context.sequelize, person.id, last);
      for (const event of events) {
        response.write(`id: ${event.id}\nevent: run\ndata: ${JSON.stringify(event.data)}\n\n`);
        last = event.id;
      }
      if (response.writableLength > mostWaiting) close();
      if (events.length === 0) return;
    }
  };
  const check = async (): Promise<void> => {
    const still = await readSignedIn(context, sessionId).catch(() => person);
    if (still === null) close();
  };
  const timer = setInterval(() => {
    response.write(': still here\n\n');
    void check();
    look();
  }, beatEvery);
  const unsubscribe = [
    context.listener.on(channels.events, (whose) => {
      if (whose === person.id) look();
    }),
    context.listener.on(channels.sessions, (whose) => {
      if (whose === person.id) void check();
    }),
    context.listener.onReconnect(look),
  ];
  const close = (): void => {
    if (closed) return;
    closed = true;
    clearInterval(timer);
    for (const end of unsubscribe) end();
    context.stopping.removeEventListener('abort', close);
    response.end();
  };
  context.stopping.addEventListener('abort', close);
  response.on('close', close);
  response.on('error', close);
  look();
}
