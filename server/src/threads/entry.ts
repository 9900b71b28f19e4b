import { parentPort } from 'node:worker_threads';
import type { TaskControl, TaskMessage, TaskReply, ThrownError } from './task';
import { tasks } from './tasks';

/** The body of a worker thread: one task at a time, as they come. */

const port = parentPort;
if (!port) throw new Error('threads/entry runs in a worker thread only');
const registry = tasks as unknown as Readonly<Record<string, (payload: unknown, control: TaskControl) => unknown>>;

port.on('message', (message: TaskMessage) => void answer(message));

async function answer({ id, name, payload, flag }: TaskMessage): Promise<void> {
  const flags = new Int32Array(flag);
  const transfers: ArrayBuffer[] = [];
  const send = (reply: TaskReply, transfer: ArrayBuffer[] = []): void => port!.postMessage(reply, transfer);
  const control: TaskControl = {
    cancelled: () => Atomics.load(flags, 0) === 1,
    progress: (phase, share) => send({ id, kind: 'progress', phase, share }),
    transfer: (...buffers) => void transfers.push(...buffers),
  };
  try {
    const task = registry[name];
    if (!task) throw new Error(`There is no task ${name}`);
    const result = await task(payload, control);
    send({ id, kind: 'done', result }, transfers);
  } catch (thrown) {
    send({ id, kind: 'failed', error: describe(thrown) });
  }
}

function describe(thrown: unknown): ThrownError {
  if (!(thrown instanceof Error)) return { name: 'Error', message: String(thrown), stack: undefined, details: {} };
  const details: Record<string, unknown> = {};
  for (const [key, value] of Object.entries(thrown)) {
    try {
      details[key] = structuredClone(value);
    } catch {
      // A function or a handle: of no use on the other side.
    }
  }
  return { name: thrown.name, message: thrown.message, stack: thrown.stack, details };
}
