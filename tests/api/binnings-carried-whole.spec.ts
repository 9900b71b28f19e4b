import { randomUUID } from 'node:crypto';
import type { Bins, CategoricalBins } from '@tallystone/contracts/binnings/bins';
import type { SentEdit } from '@tallystone/contracts/binnings/edits';
import type { Binning } from '@tallystone/contracts/binnings/schema';
import { addCut, groupCategories, moveCut, moveMissing, moveSpecial } from '@tallystone/numeric/bench';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { applicantsWithRisk, benchOf, characteristicsOf, defineApplicants } from '../support/binned';
import { type BinningWorld, numeric, sent, startBinningWorld } from '../support/binning-world';
import type { Visitor } from '../support/intake';

let world: BinningWorld;

const keptOwn = (before: Bins, after: Bins, over = 'those of marian'): SentEdit => ({
  id: randomUUID(),
  kind: 'kept own',
  what: `Kept own bins over ${over}`,
  before,
  after,
  reason: null,
});

async function save(visitor: Visitor, column: string, edits: readonly SentEdit[]): Promise<void> {
  const { path, etag, detail } = await benchOf(visitor, world.binning.id, column);
  const bins = edits.at(-1)?.after ?? detail.automatic;
  await visitor.put(path).set('If-Match', etag).send({ bins, edits }).expect(200);
}

async function startFrom(csv: string, name: string): Promise<Binning> {
  const { modeller, modelId, binning } = world;
  const { definitionId } = await defineApplicants(modeller, modelId, csv);
  const started = await modeller
    .post(`/api/models/${modelId}/binnings`)
    .send({ definitionId, name, fromBinningId: binning.id })
    .expect(201);
  const run = await modeller.ended(started.body.runId as string);
  expect(run).toMatchObject({ state: 'succeeded', problem: null });
  return (await modeller.get(`/api/binnings/${started.body.id}`).expect(200)).body as Binning;
}

beforeAll(async () => {
  world = await startBinningWorld();
  const { modeller, colleague, binning } = world;
  // Both begin with the automatic bins. She saves two edits; he has made one and keeps his bins over hers.
  {
    const { detail } = await benchOf(modeller, binning.id, 'age');
    const start = numeric(detail);
    const free = detail.fine.edges.filter((edge) => !start.edges.includes(edge));
    const hers = sent(
      start,
      moveCut(
        detail.fine,
        start,
        0,
        free.findLast((edge) => edge < start.edges[0])!,
      ),
    );
    const hersToo = sent(hers.after, addCut(detail.fine, numeric({ ...detail, current: hers.after }), free.at(-1)!));
    await save(modeller, 'age', [hers, hersToo]);
    const own = sent(start, moveMissing(start, 0, 'the first bin'));
    await save(colleague, 'age', [hers, hersToo, keptOwn(hersToo.after, start), own]);
  }
  {
    const { detail } = await benchOf(modeller, binning.id, 'utilisation');
    const start = numeric(detail);
    const missing = sent(start, moveMissing(start, 1, 'the second bin'));
    const code = sent(
      missing.after,
      moveSpecial(detail.fine, numeric({ ...detail, current: missing.after }), 0, 0, 'the first bin'),
    );
    const between = detail.fine.edges.find((edge) => edge > start.edges[0] && edge < start.edges[1])!;
    const own = sent(start, moveCut(detail.fine, start, 0, between));
    await save(colleague, 'utilisation', [missing, code, keptOwn(code.after, start), own]);
  }
  {
    const { detail } = await benchOf(modeller, binning.id, 'home');
    const start = detail.current as CategoricalBins;
    const group = (from: CategoricalBins, a: string, b: string) =>
      sent(from, groupCategories(detail.fine, from, [b], from.groups.findIndex((one) => one.includes(a)))); // prettier-ignore
    const hers = group(start, start.groups[0][0], start.groups.at(-1)!.at(-1)!);
    const own = group(start, start.groups[0][0], start.groups[1][0]);
    await save(colleague, 'home', [hers, keptOwn(hers.after, start), own]);
  }
  {
    // Classed anew into few bins, which is undone: the bins from before, and the edit on them, are in place of the new ones.
    const { detail } = await benchOf(modeller, binning.id, 'region');
    const start = detail.current as CategoricalBins;
    const edit = sent(start, groupCategories(detail.fine, start, [detail.fine.categories[0]], 'new') ?? groupCategories(detail.fine, start, detail.fine.categories.slice(0, 2), 0)); // prettier-ignore
    await save(modeller, 'region', [edit]);
    const chosen = (await characteristicsOf(modeller, binning.id)).characteristics.filter(({ column }) => column === 'region');
    await modeller
      .post(`/api/binnings/${binning.id}/reclassings`)
      .send({
        characteristics: chosen.map(({ id, revision }) => ({ id, revision })),
        constraints: { mostBins: 3, smallestDifference: 0 },
        reason: 'To look',
      })
      .expect(200);
    const anew = (await benchOf(modeller, binning.id, 'region')).detail;
    expect(anew.automatic).not.toEqual(edit.after);
    await save(modeller, 'region', [keptOwn(anew.automatic, edit.after, 'those classed anew')]);
  }
}, 240_000);
afterAll(() => world.server.stop());

const columns = ['age', 'utilisation', 'home', 'region'];

describe('bins that were put in place of others as a whole', () => {
  it('are the very same on the very same data, with every edit', async () => {
    const again = await startFrom(applicantsWithRisk(), 'The same applicants');
    expect(again.from).toMatchObject({ carried: 12, notCarried: 0, notHere: [] });
    for (const column of columns) {
      const [was, is] = await Promise.all([world.binning.id, again.id].map((id) => benchOf(world.modeller, id, column)));
      expect(is.detail.current).toEqual(was.detail.current);
      expect(is.detail.editList.map(({ what }) => what)).toEqual(was.detail.editList.map(({ what }) => what));
      expect(is.detail.informationValue).toBe(was.detail.informationValue);
    }
  });

  it('do not end a binning of other data, where their cuts lie on no fine class', async () => {
    // Ages and shares of other people, by a fraction off: no cut of the earlier bins is a fine class here.
    const [head, ...rows] = applicantsWithRisk(4000).trimEnd().split('\n');
    const lines = rows.map((row) => {
      const [id, day, age, utilisation, ...rest] = row.split(',');
      const off = (value: string) => (value === '' || value === '-999' ? value : (Number(value) + 0.37).toFixed(2));
      return [id, day, off(age), off(utilisation), ...rest].join(',');
    });
    const other = await startFrom(`${[head, ...lines].join('\n')}\n`, 'Other applicants');
    for (const column of columns) {
      const [was, is] = await Promise.all([world.binning.id, other.id].map((id) => benchOf(world.modeller, id, column)));
      const { special, missing, ...bins } = is.detail.current;
      expect({ special, missing }).toEqual({ special: was.detail.current.special, missing: was.detail.current.missing });
      if (bins.kind === 'numeric') expect(bins.edges).toEqual(numeric(was.detail).edges);
      else {
        const sets = (groups: readonly (readonly string[])[]) => groups.map((group) => [...group].sort().join()).sort();
        expect(sets(bins.groups)).toEqual(sets((was.detail.current as CategoricalBins).groups));
      }
    }
    const { detail } = await benchOf(world.modeller, other.id, 'age');
    expect(
      detail.editList.some(({ kind, what }) => kind === 'kept own' && what.startsWith('Bins as they were kept: cuts at ')),
    ).toBe(true);
  });
});
