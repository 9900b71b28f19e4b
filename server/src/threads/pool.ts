import { Worker } from 'node:worker_threads';
import { entryFile } from '../running/entry-files';
import type { TaskMessage, TaskReply, ThrownError } from './task';

/** An error that a task threw in its thread; `name` and `details` are those of the original. */
export class TaskError extends Error {
  readonly details: Readonly<Record<string, unknown>>;
  constructor(error: ThrownError) {
    super(error.message);
    this.name = error.name;
    this.details = error.details;
    if (error.stack) this.stack = error.stack;
  }
}

/** The task needed more memory than a thread may take. The thread is gone, the process is not. */
export class TaskMemoryError extends Error {
  constructor(readonly memoryMb: number) {
    super(`The work needs more than the ${memoryMb} MB that one thread may take.`);
    this.name = 'TaskMemoryError';
  }
}

export interface TaskOptions {
  readonly signal?: AbortSignal;
  readonly onProgress?: (phase: string, share: number | null) => void;
  /** Buffers of the payload that are handed over rather than copied. */
  readonly transfer?: readonly ArrayBuffer[];
}

interface Waiting {
  readonly message: TaskMessage;
  readonly options: TaskOptions;
  readonly resolve: (result: unknown) => void;
  readonly reject: (error: unknown) => void;
}

interface Thread {
  readonly worker: Worker;
  current: Waiting | null;
}

/** A task that has not stopped this long after it was cancelled is ended with its thread: work stops within 5 seconds, whatever it does. */
const patience = 3000;

/** Of the process's own flags those that leave a CPU profile: threads leave theirs beside it. */
const profiling = process.execArgv.filter((flag) => flag.startsWith('--cpu-prof'));

/** A pool of worker threads that live on between tasks, because a thread takes a quarter of a second to start. */
export class ThreadPool {
  private readonly threads = new Set<Thread>();
  private readonly waiting: Waiting[] = [];
  private nextId = 1;
  private closed = false;

  constructor(
    private readonly size: number,
    private readonly memoryMb: number,
  ) {}

  /** Runs a task in the next free thread. Rejects with the signal's reason when cancelled. */
  run(name: string, payload: unknown, options: TaskOptions = {}): Promise<unknown> {
    if (this.closed) return Promise.reject(new Error('The thread pool is closed'));
    return new Promise((resolve, reject) => {
      options.signal?.throwIfAborted();
      const message = { id: this.nextId++, name, payload, flag: new SharedArrayBuffer(4) };
      const cancel = (): void => this.cancel(item);
      const forget = (): void => options.signal?.removeEventListener('abort', cancel);
      const item: Waiting = {
        message,
        options,
        resolve: (result) => (forget(), resolve(result)),
        reject: (error) => (forget(), reject(error)),
      };
      options.signal?.addEventListener('abort', cancel, { once: true });
      this.waiting.push(item);
      this.dispatch();
    });
  }

  /** Starts the threads that are not there yet, ahead of need. */
  warm(): void {
    while (!this.closed && this.threads.size < this.size) this.start().worker.unref();
  }

  async close(): Promise<void> {
    this.closed = true;
    for (const item of this.waiting.splice(0)) item.reject(new Error('The thread pool is closed'));
    await Promise.all([...this.threads].map(({ worker }) => worker.terminate()));
  }

  private dispatch(): void {
    while (this.waiting.length > 0) {
      const thread =
        [...this.threads].find((one) => one.current === null) ?? (this.threads.size < this.size ? this.start() : null);
      if (!thread) return;
      const item = this.waiting.shift()!;
      thread.current = item;
      thread.worker.ref();
      thread.worker.postMessage(item.message, [...(item.options.transfer ?? [])]);
    }
  }

  private start(): Thread {
    const worker = new Worker(entryFile('threads/entry'), {
      resourceLimits: { maxOldGenerationSizeMb: this.memoryMb },
      execArgv: profiling,
    });
    const thread: Thread = { worker, current: null };
    this.threads.add(thread);
    worker.on('message', (reply: TaskReply) => this.hear(thread, reply));
    worker.on('error', (error: NodeJS.ErrnoException) =>
      this.lose(thread, error.code === 'ERR_WORKER_OUT_OF_MEMORY' ? new TaskMemoryError(this.memoryMb) : error),
    );
    worker.on('exit', (code) => this.lose(thread, new Error(`A worker thread ended with code ${code}`)));
    return thread;
  }

  private hear(thread: Thread, reply: TaskReply): void {
    const item = thread.current;
    if (!item || item.message.id !== reply.id) return;
    if (reply.kind === 'progress') {
      if (!item.options.signal?.aborted) item.options.onProgress?.(reply.phase, reply.share);
      return;
    }
    thread.current = null;
    // An idle thread does not keep the process alive.
    thread.worker.unref();
    if (item.options.signal?.aborted) item.reject(item.options.signal.reason);
    else if (reply.kind === 'done') item.resolve(reply.result);
    else item.reject(new TaskError(reply.error));
    this.dispatch();
  }

  private lose(thread: Thread, error: unknown): void {
    if (!this.threads.delete(thread)) return;
    const item = thread.current;
    thread.current = null;
    item?.reject(item.options.signal?.aborted ? item.options.signal.reason : error);
    if (!this.closed) this.dispatch();
  }

  private cancel(item: Waiting): void {
    const place = this.waiting.indexOf(item);
    if (place >= 0) {
      this.waiting.splice(place, 1);
      item.reject(item.options.signal?.reason);
      return;
    }
    Atomics.store(new Int32Array(item.message.flag), 0, 1);
    setTimeout(() => {
      const thread = [...this.threads].find((one) => one.current === item);
      if (thread) void thread.worker.terminate();
    }, patience).unref();
  }
}
