import { ThreadPool, type TaskOptions } from './pool';
import type { TaskName, TaskPayload, TaskResult } from './tasks';

/** Passwords have a thread of their own, so that nobody waits behind a fit to sign in. */
export type Lane = 'numbers' | 'passwords';

const settings = { count: 2, memoryMb: 3072 };
const pools = new Map<Lane, ThreadPool>();

/** States how many threads work on numbers and what memory each may take. To be called before the first task. */
export function configureThreads(chosen: { readonly count: number; readonly memoryMb: number }): void {
  Object.assign(settings, chosen);
}

/**
 * Runs a task of `tasks.ts` in a worker thread, off the event loop.
 *
 * @throws TaskError with what the task threw; TaskMemoryError when it ran out of memory; the signal's reason when cancelled
 * @example
 * const hash = await runInThread('password.hash', { prepared }, { lane: 'passwords' });
 */
export async function runInThread<Name extends TaskName>(
  name: Name,
  payload: TaskPayload<Name>,
  options: TaskOptions & { readonly lane?: Lane } = {},
): Promise<TaskResult<Name>> {
  return (await poolOf(options.lane ?? 'numbers').run(name, payload, options)) as TaskResult<Name>;
}

function poolOf(lane: Lane): ThreadPool {
  let pool = pools.get(lane);
  if (!pool) {
    pool = lane === 'passwords' ? new ThreadPool(1, 256) : new ThreadPool(settings.count, settings.memoryMb);
    pools.set(lane, pool);
  }
  return pool;
}

/** Starts all threads for numbers, where work for each of them is about to come. */
export const warmThreads = (): void => poolOf('numbers').warm();

/** How many tasks of numbers can run at once: what a batch is cut by. */
export const threadCount = (): number => settings.count;

export async function stopThreads(): Promise<void> {
  const running = [...pools.values()];
  pools.clear();
  await Promise.all(running.map((pool) => pool.close()));
}
