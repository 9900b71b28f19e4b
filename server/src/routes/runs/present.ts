import type { AnswerOf } from '@tallystone/contracts/endpoint';
import type { readRun } from '@tallystone/contracts/runs/endpoints';
import { endedRunStates } from '@tallystone/contracts/runs/schema';
import type { Actor } from '../../models/person';
import { canCancelRun } from '../../policies/runs';
import type { RunRow } from '../../services/runs/find';

export function presentRun(run: RunRow, reader: Actor): AnswerOf<typeof readRun> {
  const { personId: _, isMember: __, createdAt, startedAt, endedAt, ...rest } = run;
  const open = !endedRunStates.includes(run.state) && run.state !== 'cancelling';
  return {
    ...rest,
    createdAt: createdAt.toISOString(),
    startedAt: startedAt?.toISOString() ?? null,
    endedAt: endedAt?.toISOString() ?? null,
    abilities: open && canCancelRun(reader, run).allowed ? ['cancel'] : [],
  };
}
