import type { Bins } from '@tallystone/contracts/binnings/bins';
import type { Specification } from '@tallystone/contracts/specification/types';
import { groupCategories } from '@tallystone/numeric/bench';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { applicantsWithRisk, benchOf, characteristicsOf } from '../support/binned';
import { type BinningWorld, sent, startBinningWorld } from '../support/binning-world';
import { act, choose, fitPath, freeze, replicate, scale, writeTexts } from '../support/line';

/** The region of each applicant is one of 700 towns: more than a bin has codes for. */
function applicantsOfManyTowns(): string {
  const [head, ...rows] = applicantsWithRisk(6000).trimEnd().split('\n');
  const towns = rows.map((row, index) => {
    const cells = row.split(',');
    cells[5] = `Town ${String(index < 700 ? index : Math.floor(700 * ((index * 7919) % 6000 / 6000) ** 3)).padStart(3, '0')}`;
    return cells.join(',');
  });
  return `${head}\n${towns.join('\n')}\n`;
}

let world: BinningWorld;
beforeAll(async () => {
  world = await startBinningWorld(applicantsOfManyTowns());
}, 120_000);
afterAll(() => world.server.stop());

type Groups = Extract<Bins, { kind: 'categorical' }>;

describe('a characteristic with hundreds of categories', () => {
  it('is classed with the rarest as one, edited on the bench, and classed anew', async () => {
    const { modeller, binning } = world;
    const { characteristics } = await characteristicsOf(modeller, binning.id);
    expect(characteristics.find(({ column }) => column === 'region')).toMatchObject({ column: 'region', bins: expect.any(Number) });
    const { path, etag, detail } = await benchOf(modeller, binning.id, 'region');
    const { pooled } = detail.fine;
    const before = detail.current as Groups;
    if (!pooled || detail.definition.kind !== 'categorical') throw new Error('The rarest are pooled');
    expect(before.groups.flat()).toHaveLength(240);
    expect(detail.definition.groups.flat().length).toBe(239 + pooled.categories.length);
    // The pooled ones move together, and the specification moves each of them.
    const edit = sent(before, groupCategories(detail.fine, before, [pooled.name], 'new'));
    const saved = await modeller.put(path).set('If-Match', etag).send({ bins: edit.after, edits: [edit] }).expect(200);
    expect(saved.body.current).toEqual(edit.after);
    expect(saved.body.definition.groups).toContainEqual(pooled.categories);
    // One of them alone is not on the bench.
    const alone = { ...before, groups: [...before.groups.map((group) => group.filter((name) => name !== pooled.name)), [pooled.categories[0]]].filter(({ length }) => length > 0) };
    const refused = await modeller
      .put(path)
      .set('If-Match', saved.headers.etag)
      .send({ bins: alone, edits: [{ ...edit, id: crypto.randomUUID(), after: alone }] })
      .expect(422);
    expect(JSON.stringify(refused.body.problems)).toContain(`Development has no category \\"${pooled.categories[0]}\\"`);
    const anew = await modeller
      .post(`/api/binnings/${binning.id}/reclassings`)
      .send({ characteristics: [{ id: detail.id, revision: saved.body.revision }], constraints: {}, reason: 'As it was' })
      .expect(200);
    expect(anew.body.characteristics).toHaveLength(characteristics.length);
    expect((await benchOf(modeller, binning.id, 'region')).detail.current).toEqual(before);
  });

  it('enters a fit with cuts classed in every fold, a version, and replications that agree', async () => {
    const { modeller, validator, modelId, binning } = world;
    const fit = await fitPath(modeller, modelId, binning.id, { folds: { count: 3, seed: 1, classing: 'cuts' } });
    const { crossValidation } = (await modeller.get(`/api/fits/${fit.id}/path`).expect(200)).body;
    await choose(modeller, fit.id, { rule: 'minimum', index: crossValidation.minimum });
    await scale(modeller, fit.id);
    const version = await freeze(modeller, modelId, fit.id);
    const { body: specification } = await modeller.get(`/api/versions/${version.id}/specification`).expect(200);
    const region = (specification as Specification).characteristics.find(({ column }) => column === 'region');
    if (region?.kind !== 'categorical' || !('groups' in region)) throw new Error('It is a characteristic of the version');
    expect(region.groups.flat().length).toBeGreaterThan(600);
    await writeTexts(modeller, version.id);
    await act(modeller, version.id, { act: 'submit', statement: 'Ready for review' });
    await act(validator, version.id, { act: 'start', statement: 'Full scope' });
    for (const method of ['same code', 'independent'] as const) expect((await replicate(validator, version.id, method)).result).toMatchObject({ matches: true });
  }, 240_000);
});
