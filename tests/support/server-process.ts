import { type ChildProcess, spawn } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { request as send } from 'node:http';
import { builtPath } from './built-server';
import { IntakeServer } from './intake';

/** Real processes of the product on the database of a test's IntakeServer: to be killed, and to be measured. */
export interface ServerProcess {
  readonly process: ChildProcess;
  /** Where it answers; of a worker an address that nothing needs. */
  readonly url: string;
}

export function startServerProcess(support: IntakeServer, services: 'web' | 'worker'): Promise<ServerProcess> {
  return new Promise((resolve, reject) => {
    const child = spawn(process.execPath, [builtPath('main'), `--services=${services}`], {
      env: { ...process.env, ...IntakeServer.environment(support.database, support.folder), LOG_LEVEL: 'error' },
      stdio: ['ignore', 'ignore', 'inherit', 'ipc'],
    });
    child.once('message', (said: { type: string; url?: string; message?: string }) =>
      said.type === 'ready'
        ? resolve({ process: child, url: (said.url ?? '').replace('localhost', '127.0.0.1') })
        : reject(new Error(said.message)),
    );
    child.once('exit', (code) => reject(new Error(`The server ended with ${code}`)));
  });
}

export function killProcess(child: ChildProcess): Promise<void> {
  return new Promise((resolve) => {
    child.once('exit', () => resolve());
    process.kill(child.pid as number, 'SIGKILL');
  });
}

/** Most memory that a process has held so far, in MiB (VmHWM of Linux's /proc). */
export function peakMemoryMiB({ pid }: ChildProcess): number {
  const [, kib] = /^VmHWM:\s+(\d+) kB$/m.exec(readFileSync(`/proc/${pid}/status`, 'utf8')) ?? [];
  return Number(kib) / 1024;
}

/** Sends bytes from an offset; resolves with the status, or null when the connection broke. `stopAfter` holds the rest back. */
export function patchUpload(
  url: string,
  offset: number,
  bytes: Buffer,
  { cookie, token }: { cookie: string; token: string },
  stopAfter?: { bytes: number; reached: () => void },
): Promise<number | null> {
  return new Promise((resolve) => {
    const request = send(
      url,
      {
        method: 'PATCH',
        headers: {
          Cookie: cookie,
          'X-XSRF-TOKEN': token,
          'Tus-Resumable': '1.0.0',
          'Upload-Offset': String(offset),
          'Content-Type': 'application/offset+octet-stream',
          'Content-Length': bytes.length,
        },
      },
      (response) => {
        response.resume();
        response.once('end', () => resolve(response.statusCode ?? null));
      },
    );
    request.on('error', () => resolve(null));
    if (stopAfter) request.write(bytes.subarray(0, stopAfter.bytes), () => stopAfter.reached());
    else request.end(bytes);
  });
}
