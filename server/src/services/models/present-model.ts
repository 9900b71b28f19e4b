import type { MemberCandidates, Model, ModelMember } from '@tallystone/contracts/models/schema';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';
import type { Actor } from '../../models/person';
import { abilitiesOnModel } from '../../policies/models';
import type { FoundModel } from './find-model';
import { leadingStates } from './leading-state';

/** A model as its page shows it to this person. */
export async function presentModel(
  sequelize: Sequelize,
  model: FoundModel,
  person: Actor,
  tx: Transaction | null = null,
): Promise<Model> {
  const members = await rows<Omit<ModelMember, 'addedAt'> & { addedAt: Date }>(
    sequelize,
    `SELECT p.id AS "personId", p.name, p.email, mm.added_at AS "addedAt"
       FROM model_members mm JOIN people p ON p.id = mm.person_id WHERE mm.model_id = $1 ORDER BY p.name`,
    [model.id],
    tx,
  );
  const states = await leadingStates(sequelize, [model.id], tx);
  return {
    id: model.id,
    inventoryNumber: model.inventoryNumber,
    ...fieldsOf(model),
    state: states.get(model.id) ?? 'In development',
    members: members.map((member) => ({ ...member, addedAt: member.addedAt.toISOString() })),
    createdAt: model.createdAt.toISOString(),
    createdBy: model.createdByName,
    updatedAt: model.updatedAt.toISOString(),
    revision: model.revision,
    abilities: abilitiesOnModel(person, model),
  };
}

export const fieldsOf = ({
  name,
  purpose,
  product,
  population,
  jurisdiction,
  owner,
  materialityTier,
  intendedUse,
  prohibitedUse,
}: FoundModel) => ({
  name,
  purpose,
  product,
  population,
  jurisdiction,
  owner,
  materialityTier,
  intendedUse,
  prohibitedUse,
});

/** Active modellers who do not work on the model yet. */
export async function listCandidates(sequelize: Sequelize, model: FoundModel): Promise<MemberCandidates> {
  const people = await rows<MemberCandidates['people'][number]>(
    sequelize,
    `SELECT p.id, p.name, p.email FROM people p JOIN person_roles r ON r.person_id = p.id AND r.role = 'modeller'
      WHERE p.state = 'active' AND NOT EXISTS (SELECT 1 FROM model_members mm WHERE mm.model_id = $1 AND mm.person_id = p.id)
      ORDER BY p.name LIMIT 500`,
    [model.id],
  );
  return { people };
}
