import type { AnswerOf } from '@tallystone/contracts/endpoint';
import { listRecord, readRecordHead, verifyRecord } from '@tallystone/contracts/record/endpoints';
import { verifyRecordJob } from '../../jobs/definitions/record';
import { startRun } from '../../jobs/start-run';
import type { Actor } from '../../models/person';
import {
  canReadRecord,
  canVerifyRecord,
  openToAdmins,
  readsOwnModels,
  readsRecordOutline,
  readsWholeRecord,
} from '../../policies/record';
import * as record from '../../services/record/list';
import { recordHead } from '../../services/record/verify';
import { describeRun } from '../../services/runs/find';
import { type Route, defineRoute } from '../http/route';
import { presentRun } from '../runs/present';

type Entry = AnswerOf<typeof listRecord>['entries'][number];

function present({ own, at, ...row }: record.RecordEntryRow, reader: Actor): Entry {
  const full = readsWholeRecord(reader) || (own && readsOwnModels(reader)) || openToAdmins.includes(row.entity);
  const entry = { ...row, at: at.toISOString(), withheld: !full };
  return full ? entry : { ...entry, before: null, after: null, detail: null, reason: null };
}

export const recordRoutes: readonly Route[] = [
  defineRoute(listRecord, {
    access: 'signed-in',
    admit: canReadRecord,
    async act({ context, person, query }) {
      const found = await record.listRecord(context.sequelize, query, {
        everything: readsWholeRecord(person) || readsRecordOutline(person),
        ownModelsOf: readsOwnModels(person) ? person.id : null,
      });
      const page = found.slice(0, query.limit);
      return {
        entries: page.map((row) => present(row, person)),
        next: found.length > query.limit ? page[page.length - 1].sequence : null,
      };
    },
  }),

  defineRoute(readRecordHead, { access: 'signed-in', admit: canVerifyRecord, act: ({ context }) => recordHead(context.pool) }),

  defineRoute(verifyRecord, {
    access: 'signed-in',
    admit: canVerifyRecord,
    idempotent: true,
    async act({ context, tx, person, requestId }) {
      const run = await startRun(context, tx, verifyRecordJob, { payload: {}, person, singleton: `by ${person.id}`, requestId });
      return presentRun(await describeRun(context.sequelize, run.id, person.id, tx), person);
    },
  }),
];
