import { type ChildProcess, fork } from 'node:child_process';
import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { fileURLToPath } from 'node:url';
import { problemCodes } from '@tallystone/contracts/problems/codes';
import type { ReplicationOrder, ReplicationReply } from '../../cli/replicate-stored';
import { Problem } from '../../problems/problem';
import { entryFile } from '../../running/entry-files';

export type Replicated = Extract<ReplicationReply, { kind: 'done' }>;

/**
 * Replays a specification from raw bytes in a new process with a memory cap of its own, so that the validator's half shares nothing with what
 * made the modeller's.
 *
 * @throws Problem 422 with what the file or the data make impossible, 500-like Error when the process ends without an answer; the signal's reason
 */
export async function replicateInProcess(
  bytes: AsyncIterable<Buffer>,
  order: ReplicationOrder,
  options: { signal: AbortSignal; memoryMb: number; onProgress: (phase: string, share: number | null) => void },
): Promise<Replicated> {
  const { signal, memoryMb, onProgress } = options;
  const entry = fileURLToPath(entryFile('cli/replicate-stored'));
  const child = fork(entry, [], {
    stdio: ['pipe', 'ignore', 'pipe', 'ipc'],
    serialization: 'advanced',
    execArgv: [`--max-old-space-size=${memoryMb}`, ...(entry.endsWith('.ts') ? ['--import', 'tsx'] : [])],
    // The child needs neither the database's address nor any key.
    env: { PATH: process.env.PATH, NODE_ENV: process.env.NODE_ENV },
  });
  const stop = (): void => void child.kill('SIGKILL');
  signal.addEventListener('abort', stop, { once: true });
  try {
    const answer = answerOf(child, onProgress);
    child.send(order);
    // A child that dies closes its input: the answer then says why, not the broken pipe.
    const [done] = await Promise.all([answer, pipeline(Readable.from(bytes), child.stdin!).catch(() => undefined)]);
    if (done.kind === 'refused') {
      throw new Problem(422, problemCodes.invalid, done.messages.join(' '), {
        problems: done.messages.map((message) => ({ code: problemCodes.invalid, message, where: {} })),
      });
    }
    return done;
  } catch (error) {
    signal.throwIfAborted();
    throw error;
  } finally {
    signal.removeEventListener('abort', stop);
    stop();
  }
}

function answerOf(
  child: ChildProcess,
  onProgress: (phase: string, share: number | null) => void,
): Promise<Exclude<ReplicationReply, { kind: 'progress' }>> {
  return new Promise((resolve, reject) => {
    let complaint = '';
    child.stderr?.on('data', (chunk: Buffer) => (complaint = (complaint + chunk.toString('utf8')).slice(-4000)));
    child.on('message', (message: ReplicationReply) => {
      if (message.kind === 'progress') onProgress(message.phase, message.share);
      else resolve(message);
    });
    child.once('error', reject);
    child.once('exit', (code, cause) => {
      const memory = complaint.includes('heap out of memory');
      if (memory) reject(new Problem(422, 'memory', 'Replicating needs more memory than the process is given.'));
      else reject(new Error(`The replicating process ended with ${cause ?? code} and no answer. ${complaint}`));
    });
  });
}
