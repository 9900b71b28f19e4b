import type { ModelState } from '@tallystone/contracts/models/schema';
import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import type { Gate, NewAct } from '@tallystone/contracts/versions/schema';
import type { Transaction } from 'sequelize';
import type { z } from 'zod';
import type { NewAct as NewActSchema } from '@tallystone/contracts/versions/schema';
import type { Context } from '../../context';
import type { Actor } from '../../models/person';
import { VersionActRow } from '../../models/version';
import { conflict, invalidField } from '../../problems/problem';
import { appendRecord } from '../record/append';
import { type FoundVersion, findVersion } from './find-version';
import { gatesOf } from './gates';

type Asked = z.output<typeof NewActSchema>;
export type { NewAct };

const gateOf: Partial<Record<Asked['act'], Gate['act']>> = { submit: 'submit', conclude: 'conclude', accept: 'accept' };
const roleOf: Record<Asked['act'], 'modeller' | 'validator' | 'compliance'> = {
  submit: 'modeller',
  withdraw: 'modeller',
  start: 'validator',
  conclude: 'validator',
  accept: 'compliance',
  return: 'compliance',
};

/** Where an act leads (governance: life of a version). */
function leadsTo(version: FoundVersion, asked: Asked): ModelState {
  switch (asked.act) {
    case 'submit':
      return 'Submitted';
    case 'withdraw':
      return 'In development';
    case 'start':
      return 'In validation';
    case 'conclude':
      return asked.conclusion === 'not fit' ? 'Rejected' : 'In validation';
    case 'accept': {
      const concluding = [...version.acts].reverse().find(({ act }) => act === 'conclude');
      return concluding?.conclusion === 'fit with conditions' ? 'Approved with conditions' : 'Approved';
    }
    case 'return':
      return 'In validation';
  }
}

/**
 * Does one act in the life of a version. The caller holds the version and has asked the policy; here the gate is asked and the act written
 * with its record.
 *
 * @throws Problem 409 `gate-closed` with every item that does not hold and where it can be put right; 422 for conditions that do not fit
 */
export async function actOnVersion(context: Context, tx: Transaction, version: FoundVersion, person: Actor, asked: Asked): Promise<FoundVersion> {
  if (asked.act === 'conclude') {
    const conditional = asked.conclusion === 'fit with conditions';
    if (conditional && asked.conditions.length === 0) throw invalidField('conditions', 'conditions-missing', 'State the conditions, one at least.');
    if (!conditional && asked.conditions.length > 0) throw invalidField('conditions', 'conditions-unwanted', 'Conditions go with "fit with conditions" alone.');
  }
  // A conclusion "not fit" needs no matching replication: one that does not match may be the very reason.
  const needed = asked.act === 'conclude' && asked.conclusion === 'not fit' ? undefined : gateOf[asked.act];
  if (needed) {
    const gate = (await gatesOf(context.sequelize, version, tx)).find(({ act }) => act === needed);
    const missing = gate?.items.filter(({ holds }) => !holds) ?? [];
    if (missing.length > 0) {
      throw conflict(
        'gate-closed',
        `${missing.length === 1 ? 'One thing stands' : `${missing.length} things stand`} in the way.`,
        missing.map(({ code, label, detail, path }): ProblemItem => ({ code, message: `${label}: ${detail}`, where: path === null ? {} : { path } })),
      );
    }
  }
  const to = leadsTo(version, asked);
  const conclusion = asked.act === 'conclude' ? asked.conclusion : null;
  const conditions = asked.act === 'conclude' ? asked.conditions : [];
  await VersionActRow.create(
    {
      versionId: version.id,
      act: asked.act,
      fromState: version.state,
      toState: to,
      conclusion,
      conditions,
      statement: asked.statement,
      role: roleOf[asked.act],
      personId: person.id,
    },
    { transaction: tx },
  );
  const entry = {
    actor: person,
    entity: 'version' as const,
    entityId: version.id,
    modelId: version.modelId,
    before: { state: version.state },
    after: { state: to },
    reason: asked.statement,
  };
  const detail = { version: version.number };
  if (asked.act === 'conclude') await appendRecord(tx, { ...entry, action: 'version.concluded', detail: { ...detail, conclusion: asked.conclusion, conditions } });
  else await appendRecord(tx, { ...entry, action: eventOf[asked.act], detail });
  return (await findVersion(context.sequelize, version.id, tx))!;
}

const eventOf = {
  submit: 'version.submitted',
  withdraw: 'version.withdrawn',
  start: 'version.validation-started',
  accept: 'version.documentation-accepted',
  return: 'version.documentation-returned',
} as const;
