import { randomUUID } from 'node:crypto';
import { mkdir, writeFile } from 'node:fs/promises';
import type { AddressInfo } from 'node:net';
import { join } from 'node:path';
import { SMTPServer } from 'smtp-server';

export interface Sink {
  readonly port: number;
  close(): Promise<void>;
}

/**
 * A mail server for the demo: it takes every letter on loopback and keeps it as a file in the data folder, where whoever tries the product
 * can open the invitation they sent. It delivers nothing.
 */
export async function openSink(folder: string): Promise<Sink> {
  await mkdir(folder, { recursive: true, mode: 0o700 });
  const server = new SMTPServer({
    authOptional: true,
    disabledCommands: ['STARTTLS', 'AUTH'],
    onData(stream, _session, callback) {
      const parts: Buffer[] = [];
      stream.on('data', (part: Buffer) => parts.push(part));
      stream.on('end', () => {
        const name = `${new Date().toISOString().replaceAll(':', '-')}-${randomUUID().slice(0, 8)}.eml`;
        writeFile(join(folder, name), Buffer.concat(parts), { mode: 0o600 }).then(() => callback(), callback);
      });
    },
  });
  // A client that goes away in the middle is no reason to end the process.
  server.on('error', () => undefined);
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  return {
    port: (server.server.address() as AddressInfo).port,
    close: () => new Promise((resolve) => server.close(() => resolve())),
  };
}
