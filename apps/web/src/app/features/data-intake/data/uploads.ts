import { HttpClient, HttpXsrfTokenExtractor } from '@angular/common/http';
import { Injectable, inject, signal } from '@angular/core';
import type { ArrivedPart } from '@tallystone/contracts/samples/schema';
import { wholeFileHeader } from '@tallystone/contracts/samples/upload';
import { firstValueFrom } from 'rxjs';
import type { DetailedError, Upload } from 'tus-js-client';
import { Problem } from '../../../core/http/problem';
import { fingerprint } from './file-fingerprint';
import { Pace } from './pace';
import type { UploadSummary } from './samples';

/** A file on its way from this page. */
export interface Sending {
  readonly fileName: string;
  readonly size: number;
  readonly sent: number;
  /** Bytes of the file that were compared so far with what arrived earlier. */
  readonly compared: number;
  /** Seconds until all of it is sent, at the rate since it began or went on; null while nobody can tell. */
  readonly secondsLeft: number | null;
  /**
   * comparing: what the server has is compared with the file. waiting: the connection is away and is tried again. differs: what the server has
   * is not of this file as it is now.
   */
  readonly state: 'comparing' | 'sending' | 'waiting' | 'stopped' | 'differs' | 'failed';
  readonly problem: Problem | null;
}

/** Pieces of the size in which the server keeps a file: what is sent again at most when the connection breaks. */
const pieceBytes = 8 * 1024 * 1024;
const retryAfterMs = [0, 1000, 3000, 5000, 10_000, 20_000, 30_000, 60_000];

/**
 * Sends one file at a time to a model, by the tus protocol: it goes on after a lost connection by itself, and after a closed browser when the
 * same file is chosen again. Which part has arrived is known by the server alone. Name and size do not tell that it is the same file: what the
 * server has is compared with its beginning, and the whole with what the server has received in the end.
 */
@Injectable({ providedIn: 'root' })
export class Uploads {
  private readonly token = inject(HttpXsrfTokenExtractor);
  private readonly http = inject(HttpClient);
  private readonly now = signal<Sending | null>(null);
  private readonly pace = new Pace();
  private upload: Upload | null = null;
  /** Ends the hashing of a file that is no longer sent. */
  private hashing: AbortController | null = null;
  /** What is sent from its beginning when somebody says so. */
  private other: { readonly modelId: string; readonly file: File; readonly url: string } | null = null;

  readonly sending = this.now.asReadonly();

  /**
   * `arrived` once the server has the file as a whole; `differs` where what it has is of another file, which `beginAnew` then replaces;
   * `dropped` where it was given up meanwhile. `unfinished` = uploads that the server still holds for this person.
   *
   * @throws Problem for everything else
   */
  async send(modelId: string, file: File, unfinished: readonly UploadSummary[]): Promise<'arrived' | 'differs' | 'dropped'> {
    const resumed = unfinished.find(({ fileName, size }) => fileName === file.name && size === file.size);
    if (!resumed) return this.transfer(modelId, file, null);
    const url = `/api/models/${modelId}/uploads/${resumed.id}`;
    this.now.set({
      fileName: file.name,
      size: file.size,
      sent: resumed.offset,
      compared: 0,
      secondsLeft: null,
      state: 'comparing',
      problem: null,
    });
    const stop = this.hashAnew();
    try {
      const arrived = await firstValueFrom(this.http.get<ArrivedPart>(`${url}/arrived`));
      this.pace.begin(0);
      const ours = await fingerprint(file, arrived.offset, {
        signal: stop,
        onProgress: (compared) => this.patch({ compared, secondsLeft: this.pace.left(compared, arrived.offset) }),
      });
      if (ours !== arrived.sha256) return this.differs(modelId, file, url);
    } catch (cause) {
      if (stop.aborted) return 'dropped';
      throw cause instanceof Problem ? cause : unreadable(cause);
    }
    return this.transfer(modelId, file, url);
  }

  /** Has the server forget what it has of another file, and sends this one from its beginning. */
  async beginAnew(): Promise<'arrived' | 'differs' | 'dropped'> {
    if (this.other === null) return 'dropped';
    const { modelId, file, url } = this.other;
    this.patch({ state: 'sending', sent: 0, problem: null });
    await this.terminate(url);
    return this.transfer(modelId, file, null);
  }

  private async transfer(modelId: string, file: File, url: string | null): Promise<'arrived' | 'differs'> {
    const tus = await import('tus-js-client');
    this.other = null;
    this.pace.stop();
    this.now.update((sending) => ({
      fileName: file.name,
      size: file.size,
      sent: url === null ? 0 : (sending?.sent ?? 0),
      compared: 0,
      secondsLeft: null,
      state: 'sending',
      problem: null,
    }));
    const whole = fingerprint(file, file.size, { signal: this.hashAnew() });
    // Heard where it is awaited, with the last piece.
    whole.catch(() => undefined);
    return new Promise((resolve, reject) => {
      const upload = new tus.Upload(file, {
        endpoint: `/api/models/${modelId}/uploads`,
        uploadUrl: url,
        chunkSize: pieceBytes,
        retryDelays: retryAfterMs,
        storeFingerprintForResuming: false,
        metadata: { filename: file.name },
        onBeforeRequest: async (request) => {
          const token = this.token.getToken();
          if (token !== null) request.setHeader('X-XSRF-TOKEN', token);
          const from = Number(request.getHeader('Upload-Offset') ?? Number.NaN);
          if (request.getMethod() !== 'PATCH' || from + pieceBytes < file.size) return;
          request.setHeader(wholeFileHeader, await whole.catch((cause: unknown) => Promise.reject(unreadable(cause))));
          // Stopped while the file was still being hashed: a request that has not gone out is not ended by the library.
          if (this.now()?.state === 'stopped') throw new DOMException('Stopped', 'AbortError');
        },
        onShouldRetry: (error) => {
          if (ofThePage(error)) return false;
          const status = statusOf(error);
          const again = status === 0 || status === 409 || status === 423 || status === 429 || status >= 500;
          if (again) this.patch({ state: 'waiting', secondsLeft: null });
          return again;
        },
        onProgress: (sent) => {
          // What went out before a pause says nothing of the rate after it.
          if (this.now()?.state !== 'sending' || !this.pace.begun) this.pace.begin(sent);
          this.patch({ sent, state: 'sending', secondsLeft: this.pace.left(sent, file.size) });
        },
        onSuccess: () => {
          this.now.set(null);
          resolve('arrived');
        },
        onError: (error) => {
          const problem = problemOf(error);
          if (problem.code === 'other-file' && upload.url !== null) {
            resolve(this.differs(modelId, file, upload.url));
            return;
          }
          this.patch({ state: 'failed', problem });
          reject(problem);
        },
      });
      this.upload = upload;
      upload.start();
    });
  }

  private differs(modelId: string, file: File, url: string): 'differs' {
    this.other = { modelId, file, url };
    this.patch({ state: 'differs' });
    return 'differs';
  }

  private hashAnew(): AbortSignal {
    this.hashing?.abort();
    this.hashing = new AbortController();
    return this.hashing.signal;
  }

  /** Stops sending; what has arrived stays with the server and can be taken up again. */
  async stop(): Promise<void> {
    if (this.now()?.state === 'comparing') {
      this.clear();
      return;
    }
    await this.upload?.abort();
    this.pace.stop();
    this.patch({ state: 'stopped', secondsLeft: null });
  }

  goOn(): void {
    this.pace.stop();
    this.patch({ state: 'sending', problem: null });
    this.upload?.start();
  }

  /** Stops sending and has the server forget what has arrived. */
  async drop(): Promise<void> {
    await this.upload?.abort(true);
    this.clear();
  }

  clear(): void {
    this.hashing?.abort();
    this.upload = null;
    this.other = null;
    this.now.set(null);
  }

  /** Drops an unfinished upload of an earlier visit. */
  async forget(modelId: string, uploadId: string): Promise<void> {
    await this.terminate(`/api/models/${modelId}/uploads/${uploadId}`);
  }

  private async terminate(url: string): Promise<void> {
    const { Upload } = await import('tus-js-client');
    await Upload.terminate(url, {
      onBeforeRequest: (request) => request.setHeader('X-XSRF-TOKEN', this.token.getToken() ?? ''),
    });
  }

  private patch(change: Partial<Sending>): void {
    this.now.update((sending) => (sending ? { ...sending, ...change } : sending));
  }
}

function statusOf(error: Error | DetailedError): number {
  return 'originalResponse' in error ? (error.originalResponse?.getStatus() ?? 0) : 0;
}

/** A file that cannot be read any more, because it was changed or removed since it was chosen. */
function unreadable(cause: unknown): Problem {
  const why = cause instanceof Error ? cause.message : String(cause);
  return new Problem(0, 'unreadable', 'The file cannot be read any more', `Choose it again. The browser says: ${why}`);
}

/** What went wrong on this side before a request went out. */
function ofThePage(error: Error | DetailedError): Problem | null {
  return 'causingError' in error && error.causingError instanceof Problem ? error.causingError : null;
}

/** What the server said, or that it was not reached. */
function problemOf(error: Error | DetailedError): Problem {
  const own = ofThePage(error);
  if (own) return own;
  const status = statusOf(error);
  const text = 'originalResponse' in error ? (error.originalResponse?.getBody() ?? '') : '';
  try {
    const told = JSON.parse(text) as { code?: string; title?: string; detail?: string; problems?: Problem['problems'] };
    return new Problem(
      status,
      told.code ?? 'failed',
      told.title ?? 'The file was not taken',
      told.detail ?? '',
      told.problems ?? [],
    );
  } catch {
    return new Problem(
      status,
      status === 0 ? 'unreachable' : 'failed',
      status === 0 ? 'The server cannot be reached' : 'The file was not taken',
      'What has arrived is kept: choose the same file again and it goes on from there.',
    );
  }
}
