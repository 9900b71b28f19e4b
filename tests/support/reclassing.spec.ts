import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { CharacteristicList } from '@tallystone/contracts/binnings/schema';
import { type BinningWorld, startBinningWorld } from './binning-world';
import { reclassings, timeReclassing, waitsOf } from './reclassing';

describe('what classing one characteristic anew is waited for', () => {
  let world: BinningWorld;
  beforeAll(async () => {
    world = await startBinningWorld();
  });
  afterAll(() => world.server.stop());

  it('is the smallest wait that so many are not above', () => {
    const values = Array.from({ length: 60 }, (_, place) => ((place * 7) % 60) + 1);
    expect(waitsOf(values)).toEqual({ p50: 30, p95: 57 });
    expect(waitsOf([5])).toEqual({ p50: 5, p95: 5 });
  });

  it('is measured by requests, each of which classes one anew', async () => {
    const { modeller, binning } = world;
    const list = async () =>
      ((await modeller.get(`/api/binnings/${binning.id}/characteristics`).expect(200)).body as CharacteristicList)
        .characteristics;
    const before = await list();
    const began = performance.now();
    const waits = await timeReclassing(modeller, binning.id, before);
    const all = performance.now() - began;
    expect(waits.p50).toBeGreaterThan(0);
    expect(waits.p95).toBeGreaterThanOrEqual(waits.p50);
    // Half of the requests took the median or longer, one after the other.
    expect((waits.p50 * reclassings) / 2).toBeLessThanOrEqual(all);
    const turns = (await list()).map(({ revision }, place) => revision - before[place].revision);
    expect(turns.reduce((sum, one) => sum + one, 0)).toBe(reclassings);
    expect(Math.max(...turns) - Math.min(...turns)).toBeLessThanOrEqual(1);
  });
});
