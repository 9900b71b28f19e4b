import type { Response } from 'express';

/** Sends bytes as a file to be kept: never shown by the browser, guessed at, or stored on the way. */
export function sendAttachment(response: Response, file: { name: string; type: string }, bytes: Buffer | string): void {
  response
    .setHeader('Content-Type', file.type)
    .setHeader('Content-Disposition', `attachment; filename="${file.name}"`)
    .setHeader('Content-Length', Buffer.byteLength(bytes))
    .setHeader('X-Content-Type-Options', 'nosniff')
    .setHeader('Cache-Control', 'no-store')
    .end(bytes);
}
