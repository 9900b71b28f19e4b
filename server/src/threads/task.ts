/** What a task is given beside its payload. */
export interface TaskControl {
  /** True once the work is no longer wanted: a long task looks now and then and returns or throws. */
  readonly cancelled: () => boolean;
  /** Says how far it is: phase in words, share 0 to 1 of the task or null where it cannot be told. */
  readonly progress: (phase: string, share: number | null) => void;
  /** Names buffers of the result that are handed over rather than copied. */
  readonly transfer: (...buffers: ArrayBuffer[]) => void;
}

/** A pure function that runs in a worker thread. Payload and result are structured clones: typed arrays stay typed arrays. */
export type Task<Payload, Result> = (payload: Payload, control: TaskControl) => Result | Promise<Result>;

/** From the pool to a thread. `flag` is set to 1 from outside when the work is cancelled. */
export interface TaskMessage {
  readonly id: number;
  readonly name: string;
  readonly payload: unknown;
  readonly flag: SharedArrayBuffer;
}

/** From a thread to the pool. */
export type TaskReply =
  | { readonly id: number; readonly kind: 'progress'; readonly phase: string; readonly share: number | null }
  | { readonly id: number; readonly kind: 'done'; readonly result: unknown }
  | { readonly id: number; readonly kind: 'failed'; readonly error: ThrownError };

export interface ThrownError {
  readonly name: string;
  readonly message: string;
  readonly stack: string | undefined;
  /** Whatever else the error carried that can be cloned (a code, places). */
  readonly details: Readonly<Record<string, unknown>>;
}
