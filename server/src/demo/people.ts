import type { Role } from '@tallystone/contracts/people/schema';
import type { Context } from '../context';
import { inTransaction } from '../database/transaction';
import { type Actor, Person } from '../models/person';
import { hashPassword } from '../services/passwords/prepare';
import { actorOf } from '../services/people/actor-of';
import { createPerson } from '../services/people/create';
import { nobody } from '../services/record/append';

/** One person for each role of Saltmarsh Mutual, an invented lender. Their passwords are public: they exist in the demo only. */
export const demoPeople = [
  { role: 'modeller', name: 'Mara Modeller', email: 'modeller@saltmarsh.example', password: 'tide-pools-at-noon' },
  { role: 'validator', name: 'Vito Validator', email: 'validator@saltmarsh.example', password: 'herons-over-the-flats' },
  { role: 'compliance', name: 'Cleo Compliance', email: 'compliance@saltmarsh.example', password: 'samphire-on-the-bank' },
  { role: 'admin', name: 'Ada Admin', email: 'admin@saltmarsh.example', password: 'keys-of-the-boathouse' },
  { role: 'auditor', name: 'Otto Auditor', email: 'auditor@saltmarsh.example', password: 'ledger-by-lamplight' },
] as const satisfies readonly { role: Role; name: string; email: string; password: string }[];

export type DemoRole = (typeof demoPeople)[number]['role'];

/** Makes whoever of the demo's people is missing; safe to run again. Refuses outside the demo. */
export async function ensureDemoPeople(context: Pick<Context, 'config' | 'sequelize'>): Promise<Record<DemoRole, Actor>> {
  if (!context.config.demo) throw new Error('Demo people are made in the demo only (TALLYSTONE_DEMO=1)');
  const made: Partial<Record<DemoRole, Actor>> = {};
  for (const { role, name, email, password } of demoPeople) {
    const known = await Person.findOne({ where: { email }, attributes: ['id'] });
    if (known) {
      made[role] = await actorOf(known.id);
      continue;
    }
    const passwordHash = await hashPassword(context, password);
    made[role] = await inTransaction(context.sequelize, (tx) =>
      createPerson(tx, { name, email, passwordHash, roles: [role], by: 'demo', actor: nobody('Demo') }),
    );
  }
  return made as Record<DemoRole, Actor>;
}
