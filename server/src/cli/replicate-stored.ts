import type { Specification } from '@tallystone/contracts/specification/types';
import type { Result } from '@tallystone/contracts/result/types';
import { ReadingError, readForReplay } from '../reading/index';
import { type Challenge, type Method, ReplayError, challenge, replay } from '../replay/index';
import { scoreFingerprint } from '../replay/score-fingerprint';

/**
 * The validator's half, in a process of its own: reads a raw file from standard input, replays a specification, answers over the IPC channel
 * and ends. It knows no database, no key and no earlier result. Started by `services/validation/replicate-in-process.ts`.
 */
export interface ReplicationOrder {
  readonly specification: Specification;
  readonly specificationSha256: string;
  readonly method: Method;
  readonly version: string;
}

export type ReplicationReply =
  | { readonly kind: 'progress'; readonly phase: string; readonly share: number | null }
  | { readonly kind: 'done'; readonly result: Result; readonly scores: { sha256: string; count: number } | null; /** With the independent method alone. */ readonly challenge: Challenge | null; readonly dataSha256: string; readonly rows: number }
  | { readonly kind: 'refused'; readonly messages: readonly string[] };

const reply = (message: ReplicationReply): Promise<void> =>
  new Promise((resolve, reject) => process.send?.(message, (error: Error | null) => (error ? reject(error) : resolve())));

async function carryOut({ specification, specificationSha256, method, version }: ReplicationOrder): Promise<void> {
  const progress = (phase: string, share: number | null): void => void reply({ kind: 'progress', phase, share });
  progress('Reading the raw file', 0);
  const { source, sha256, rows } = await readForReplay(process.stdin, specification);
  const replayed = replay({
    specification,
    specificationSha256,
    dataSha256: sha256,
    source,
    version,
    method,
    onFit: (done, count) => progress('Fitting the path', 0.3 + (0.1 * done) / count),
    onFold: (done, count) => progress('Cross-validating', 0.4 + (0.55 * done) / count),
  });
  if (method === 'independent') progress('Fitting the foreign challenger', 0.96);
  const challenged = method === 'independent' ? challenge(replayed) : null;
  await reply({ kind: 'done', result: replayed.result, scores: scoreFingerprint(replayed, specification), challenge: challenged, dataSha256: sha256, rows });
}

process.once('message', (order: ReplicationOrder) => {
  carryOut(order)
    .catch((error: unknown) => {
      if (error instanceof ReadingError || error instanceof ReplayError) return reply({ kind: 'refused', messages: error.problems.map(({ message }) => message) });
      throw error;
    })
    .finally(() => process.disconnect());
});
// Whoever asked is gone: there is nobody to answer.
process.once('disconnect', () => process.exit());
