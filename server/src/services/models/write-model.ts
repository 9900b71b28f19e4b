import type { ModelEdit, ModelFields } from '@tallystone/contracts/models/schema';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';
import { GovernedModel } from '../../models/model';
import type { Actor } from '../../models/person';
import { conflict, invalidField } from '../../problems/problem';
import { appendRecord } from '../record/append';
import { type FoundModel, findModel } from './find-model';
import { fieldsOf } from './present-model';

/** Enters a model in the inventory; whoever enters it is its first member. */
export async function createModel(tx: Transaction, person: Actor, fields: ModelFields): Promise<FoundModel> {
  const { id } = await GovernedModel.create({ ...fields, createdBy: person.id }, { transaction: tx });
  const sequelize = sequelizeOf();
  await rows(
    sequelize,
    'INSERT INTO model_members (model_id, person_id) VALUES ($1, $2) RETURNING model_id',
    [id, person.id],
    tx,
  );
  const model = await found(sequelize, id, tx);
  await appendRecord(tx, {
    actor: person,
    action: 'model.created',
    entity: 'model',
    entityId: id,
    modelId: id,
    after: fields,
    detail: { inventoryNumber: model.inventoryNumber },
  });
  return model;
}

/** Changes what is sent, and records only what is now different. The caller has held If-Match against `model.revision` under its lock. */
export async function editModel(tx: Transaction, person: Actor, model: FoundModel, edit: ModelEdit): Promise<FoundModel> {
  const before = fieldsOf(model);
  const changed = (Object.keys(edit) as (keyof ModelFields)[]).filter(
    (field) => edit[field] !== undefined && edit[field] !== before[field],
  );
  if (changed.length === 0) return model;
  const pick = (of: Partial<ModelFields>): Partial<ModelFields> => Object.fromEntries(changed.map((field) => [field, of[field]]));
  await GovernedModel.update(
    { ...pick(edit), revision: model.revision + 1, updatedAt: sequelizeOf().fn('now') },
    { where: { id: model.id, revision: model.revision }, transaction: tx },
  );
  await appendRecord(tx, {
    actor: person,
    action: 'model.edited',
    entity: 'model',
    entityId: model.id,
    modelId: model.id,
    before: pick(before),
    after: pick(edit),
  });
  return found(sequelizeOf(), model.id, tx);
}

/** @throws Problem 422 when the person is no active modeller */
export async function addMember(tx: Transaction, person: Actor, model: FoundModel, personId: string): Promise<FoundModel> {
  const sequelize = sequelizeOf();
  const [modeller] = await rows<{ name: string }>(
    sequelize,
    `SELECT p.name FROM people p JOIN person_roles r ON r.person_id = p.id AND r.role = 'modeller' WHERE p.id = $1 AND p.state = 'active'`,
    [personId],
    tx,
  );
  if (!modeller)
    throw invalidField('personId', 'no-modeller', 'This is nobody with the role of a modeller. An admin gives roles.');
  const added = await rows(
    sequelize,
    'INSERT INTO model_members (model_id, person_id) VALUES ($1, $2) ON CONFLICT DO NOTHING RETURNING person_id',
    [model.id, personId],
    tx,
  );
  if (added.length > 0) {
    const after = { personId, name: modeller.name };
    await appendRecord(tx, {
      actor: person,
      action: 'model.member-added',
      entity: 'model',
      entityId: model.id,
      modelId: model.id,
      after,
    });
  }
  return found(sequelize, model.id, tx);
}

/** @throws Problem 409 for the last member: a model that nobody works on could be neither seen nor taken up by its makers */
export async function removeMember(tx: Transaction, person: Actor, model: FoundModel, personId: string): Promise<FoundModel> {
  const sequelize = sequelizeOf();
  if (!model.memberIds.includes(personId)) return model;
  if (model.memberIds.length === 1)
    throw conflict('last-member', 'This is the last modeller of the model. Add another one first.');
  const [{ name }] = await rows<{ name: string }>(sequelize, 'SELECT name FROM people WHERE id = $1', [personId], tx);
  await rows(
    sequelize,
    'DELETE FROM model_members WHERE model_id = $1 AND person_id = $2 RETURNING person_id',
    [model.id, personId],
    tx,
  );
  await appendRecord(tx, {
    actor: person,
    action: 'model.member-removed',
    entity: 'model',
    entityId: model.id,
    modelId: model.id,
    before: { personId, name },
  });
  return found(sequelize, model.id, tx);
}

function sequelizeOf(): Sequelize {
  const { sequelize } = GovernedModel;
  if (!sequelize) throw new Error('The models are not defined yet');
  return sequelize;
}

async function found(sequelize: Sequelize, id: string, tx: Transaction): Promise<FoundModel> {
  const model = await findModel(sequelize, id, tx);
  if (!model) throw new Error(`Model ${id} is gone`);
  return model;
}
