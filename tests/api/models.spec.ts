import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { IntakeServer, type Visitor, modelFields } from '../support/intake';

let server: IntakeServer;
let modeller: Visitor;
let other: Visitor;
let validator: Visitor;
let admin: Visitor;

beforeAll(async () => {
  server = await IntakeServer.start({ worker: false });
  modeller = await server.signIn('marian', 'modeller');
  other = await server.signIn('oswin', 'modeller');
  validator = await server.signIn('vera', 'validator');
  admin = await server.signIn('adrian', 'admin');
});
afterAll(() => server.stop());

describe('the inventory of models', () => {
  it('gives each model a number of its own and its maker as first member', async () => {
    const first = await modeller.post('/api/models').send(modelFields).expect(201);
    const second = await modeller
      .post('/api/models')
      .send({ ...modelFields, name: 'Car loans' })
      .expect(201);
    expect(first.body.inventoryNumber).toMatch(/^M-\d{4,}$/);
    expect(second.body.inventoryNumber).not.toBe(first.body.inventoryNumber);
    expect(first.body).toMatchObject({ state: 'In development', revision: 1, intendedUse: '', members: [{ name: 'marian' }] });
    expect(first.body.abilities).toEqual(['edit', 'manage-members', 'develop', 'read-content']);
  });

  it('says everything that is missing at once', async () => {
    const { body } = await modeller.post('/api/models').send({ name: ' ', materialityTier: 9, colour: 'blue' }).expect(422);
    expect(body.problems.map((problem: { where: { field: string } }) => problem.where.field).sort()).toEqual(
      ['colour', 'jurisdiction', 'materialityTier', 'name', 'owner', 'population', 'product', 'purpose'].sort(),
    );
  });

  it('is entered by modellers alone, and read by whoever may', async () => {
    await validator.post('/api/models').send(modelFields).expect(403);
    const id = await modeller.model('Seen by some');
    await other.get(`/api/models/${id}`).expect(404);
    await validator.get(`/api/models/${id}`).expect(200);
    const seen = await admin.get(`/api/models/${id}`).expect(200);
    expect(seen.body.abilities).toEqual(['manage-members']);
    // An admin reads the inventory and nothing inside a model.
    await admin.get(`/api/models/${id}/samples`).expect(404);
    await admin.get(`/api/models/${id}/work`).expect(404);
    const lists = await Promise.all(
      [modeller, other, validator].map((visitor) => visitor.get('/api/models?search=seen%20by').expect(200)),
    );
    expect(lists.map(({ body }) => body.models.length)).toEqual([1, 0, 1]);
  });

  it('changes only under the tag that was read', async () => {
    const id = await modeller.model('Edited');
    const read = await modeller.get(`/api/models/${id}`).expect(200);
    await modeller.patch(`/api/models/${id}`).send({ owner: 'Someone' }).expect(428);
    const saved = await modeller
      .patch(`/api/models/${id}`)
      .set('If-Match', read.headers.etag)
      .send({ owner: 'Someone' })
      .expect(200);
    expect(saved.body).toMatchObject({ owner: 'Someone', revision: 2, purpose: modelFields.purpose });
    await modeller.patch(`/api/models/${id}`).set('If-Match', read.headers.etag).send({ owner: 'Another' }).expect(412);
    await validator.patch(`/api/models/${id}`).set('If-Match', saved.headers.etag).send({ owner: 'Another' }).expect(403);
    await other.patch(`/api/models/${id}`).set('If-Match', saved.headers.etag).send({ owner: 'Another' }).expect(404);
  });

  it('loses no edit of many at once', async () => {
    const id = await modeller.model('Raced');
    const { headers } = await modeller.get(`/api/models/${id}`);
    const answers = await Promise.all(
      Array.from({ length: 12 }, (_, k) =>
        modeller
          .patch(`/api/models/${id}`)
          .set('If-Match', headers.etag)
          .send({ owner: `Owner ${k}` }),
      ),
    );
    expect(answers.filter(({ status }) => status === 200)).toHaveLength(1);
    expect(answers.filter(({ status }) => status === 412)).toHaveLength(11);
  });

  it('lets colleagues in and out, but not the last one', async () => {
    const id = await modeller.model('Shared');
    await modeller.post(`/api/models/${id}/members`).send({ personId: validator.personId }).expect(422);
    const candidates = await modeller.get(`/api/models/${id}/member-candidates`).expect(200);
    expect(candidates.body.people.map(({ name }: { name: string }) => name)).toEqual(['oswin']);
    await modeller.post(`/api/models/${id}/members`).send({ personId: other.personId }).expect(201);
    await other.get(`/api/models/${id}`).expect(200);
    await modeller.delete(`/api/models/${id}/members/${other.personId}`).expect(200);
    await other.get(`/api/models/${id}`).expect(404);
    const { body } = await modeller.delete(`/api/models/${id}/members/${modeller.personId}`).expect(409);
    expect(body.code).toBe('last-member');
  });

  it('shows how far the work has come', async () => {
    const id = await modeller.model('Worked on');
    const { body } = await modeller.get(`/api/models/${id}/work`).expect(200);
    expect(body.steps.map(({ step, state }: { step: string; state: string }) => `${step} ${state}`)).toEqual([
      'sample current',
      'binning ahead',
      'fit ahead',
      'scorecard ahead',
      'version ahead',
      'validation ahead',
      'documentation ahead',
    ]);
  });

  it('records who entered and who changed what', async () => {
    const id = await modeller.model('Recorded');
    const { headers } = await modeller.get(`/api/models/${id}`);
    await modeller.patch(`/api/models/${id}`).set('If-Match', headers.etag).send({ owner: 'Someone else' }).expect(200);
    const { body } = await validator.get(`/api/record?modelId=${id}`).expect(200);
    expect(body.entries.map(({ action }: { action: string }) => action)).toEqual(['model.edited', 'model.created']);
    expect(body.entries[0]).toMatchObject({
      before: { owner: modelFields.owner },
      after: { owner: 'Someone else' },
      actorName: 'marian',
    });
  });
});
