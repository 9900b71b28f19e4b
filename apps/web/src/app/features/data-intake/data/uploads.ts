import { HttpXsrfTokenExtractor } from '@angular/common/http';
import { Injectable, inject, signal } from '@angular/core';
import type { DetailedError, Upload } from 'tus-js-client';
import { Problem } from '../../../core/http/problem';
import type { UploadSummary } from './samples';

/** A file on its way from this page. */
export interface Sending {
  readonly fileName: string;
  readonly size: number;
  readonly sent: number;
  /** waiting: the connection is away and is tried again. */
  readonly state: 'sending' | 'waiting' | 'stopped' | 'failed';
  readonly problem: Problem | null;
}

/** Pieces of the size in which the server keeps a file: what is sent again at most when the connection breaks. */
const pieceBytes = 8 * 1024 * 1024;
const retryAfterMs = [0, 1000, 3000, 5000, 10_000, 20_000, 30_000, 60_000];

/**
 * Sends one file at a time to a model, by the tus protocol: it goes on after a lost connection by itself, and after a closed browser when the
 * same file is chosen again. Which part has arrived is known by the server alone.
 */
@Injectable({ providedIn: 'root' })
export class Uploads {
  private readonly token = inject(HttpXsrfTokenExtractor);
  private readonly now = signal<Sending | null>(null);
  private upload: Upload | null = null;

  readonly sending = this.now.asReadonly();

  /** Resolves once the file has arrived as a whole. `unfinished` = uploads that the server still holds for this person. */
  async send(modelId: string, file: File, unfinished: readonly UploadSummary[]): Promise<void> {
    const tus = await import('tus-js-client');
    const resumed = unfinished.find(({ fileName, size }) => fileName === file.name && size === file.size);
    this.now.set({ fileName: file.name, size: file.size, sent: resumed?.offset ?? 0, state: 'sending', problem: null });
    await new Promise<void>((resolve, reject) => {
      this.upload = new tus.Upload(file, {
        endpoint: `/api/models/${modelId}/uploads`,
        uploadUrl: resumed ? `/api/models/${modelId}/uploads/${resumed.id}` : null,
        chunkSize: pieceBytes,
        retryDelays: retryAfterMs,
        storeFingerprintForResuming: false,
        metadata: { filename: file.name },
        onBeforeRequest: (request) => {
          const token = this.token.getToken();
          if (token !== null) request.setHeader('X-XSRF-TOKEN', token);
        },
        onShouldRetry: (error) => {
          const status = statusOf(error);
          const again = status === 0 || status === 409 || status === 423 || status === 429 || status >= 500;
          if (again) this.patch({ state: 'waiting' });
          return again;
        },
        onProgress: (sent) => this.patch({ sent, state: 'sending' }),
        onSuccess: () => {
          this.now.set(null);
          resolve();
        },
        onError: (error) => {
          const problem = problemOf(error);
          this.patch({ state: 'failed', problem });
          reject(problem);
        },
      });
      this.upload.start();
    });
  }

  /** Stops sending; what has arrived stays with the server and can be taken up again. */
  async stop(): Promise<void> {
    await this.upload?.abort();
    this.patch({ state: 'stopped' });
  }

  goOn(): void {
    this.patch({ state: 'sending', problem: null });
    this.upload?.start();
  }

  /** Stops sending and has the server forget what has arrived. */
  async drop(): Promise<void> {
    await this.upload?.abort(true);
    this.clear();
  }

  clear(): void {
    this.upload = null;
    this.now.set(null);
  }

  /** Drops an unfinished upload of an earlier visit. */
  async forget(modelId: string, uploadId: string): Promise<void> {
    const { Upload } = await import('tus-js-client');
    await Upload.terminate(`/api/models/${modelId}/uploads/${uploadId}`, {
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

/** What the server said, or that it was not reached. */
function problemOf(error: Error | DetailedError): Problem {
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
