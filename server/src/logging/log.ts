import { pino, type Logger } from 'pino';

export type Log = Logger;

/** What never reaches the log: cookies, tokens and whatever a body may hold. */
export const redacted = [
  'req.headers.cookie',
  'req.headers["x-xsrf-token"]',
  'req.headers.authorization',
  'res.headers["set-cookie"]',
  '*.password',
  '*.token',
];

/** JSON lines on standard output. */
export function createLog(level: string): Log {
  return pino({
    level,
    base: { pid: process.pid },
    redact: { paths: redacted, remove: true },
    timestamp: pino.stdTimeFunctions.isoTime,
  });
}
