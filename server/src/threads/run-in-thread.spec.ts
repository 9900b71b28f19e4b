import { afterAll, expect, it } from 'vitest';
import { ThreadPool, TaskError } from './pool';
import { runInThread, stopThreads } from './run-in-thread';

afterAll(stopThreads);

it('hashes and verifies in a thread', async () => {
  const hash = await runInThread('password.hash', { prepared: 'a prepared password' }, { lane: 'passwords' });
  expect(hash).toMatch(/^\$2[aby]\$12\$/);
  expect(await runInThread('password.verify', { prepared: 'a prepared password', hash }, { lane: 'passwords' })).toBe(true);
  expect(await runInThread('password.verify', { prepared: 'another', hash }, { lane: 'passwords' })).toBe(false);
});

it('gives back what a task threw', async () => {
  const pool = new ThreadPool(1, 256);
  await expect(pool.run('no such task', {})).rejects.toBeInstanceOf(TaskError);
  await expect(pool.run('no such task', {})).rejects.toThrow('There is no task no such task');
  await pool.close();
});

it('takes a cancelled task from the queue and ends one that does not listen within 5 seconds', async () => {
  const pool = new ThreadPool(1, 256);
  const stop = new AbortController();
  const started = Date.now();
  // Cost 12 takes half a second and never looks at the flag: many of them in one thread make a queue.
  const first = pool.run('password.hash', { prepared: 'x' }, { signal: stop.signal });
  const second = pool.run('password.hash', { prepared: 'y' }, { signal: stop.signal });
  stop.abort(new Error('no longer wanted'));
  const ended = await Promise.allSettled([first, second]);
  expect(ended.map((one) => (one.status === 'rejected' ? one.reason.message : one.status))).toEqual([
    'no longer wanted',
    'no longer wanted',
  ]);
  expect(Date.now() - started).toBeLessThan(5000);
  await pool.close();
});
