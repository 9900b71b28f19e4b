import { appendRecord } from '../../services/record/append';
import { verifyChain } from '../../services/record/verify';
import { actorOf } from '../../services/people/actor-of';
import { verifyRecordJob } from '../definitions/record';
import { handle } from '../handler';

export const verifyRecord = handle(verifyRecordJob, {
  async work(_payload, { context, run, signal, progress, finish }) {
    const found = await verifyChain(context.pool, { signal, onProgress: (share) => progress('Verifying the chain', share) });
    await finish(async (tx) => {
      await appendRecord(tx, {
        actor: await actorOf(run.personId, tx),
        action: 'record.verified',
        entity: 'record',
        entityId: null,
        detail: { rows: found.rows, intact: found.intact, faults: found.faultCount, head: found.head.hash },
      });
      return found;
    });
  },
});
