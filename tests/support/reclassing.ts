import type { CharacteristicSummary } from '@tallystone/contracts/binnings/schema';
import type { Visitor } from './intake';

/** In milliseconds. */
export interface Waits {
  readonly p50: number;
  readonly p95: number;
}

/** How many are timed. */
export const reclassings = 60;

/** The median and the 95th percentile of what was waited for: the smallest value that so many are not above. */
export function waitsOf(milliseconds: readonly number[]): Waits {
  const sorted = [...milliseconds].sort((a, b) => a - b);
  const at = (share: number): number => sorted[Math.ceil(share * sorted.length) - 1];
  return { p50: at(0.5), p95: at(0.95) };
}

/** One characteristic after the other is classed anew through the API, as the bench of a characteristic asks for it. */
export async function timeReclassing(
  modeller: Visitor,
  binningId: string,
  listed: readonly CharacteristicSummary[],
  constraints: Record<string, unknown> = {},
): Promise<Waits> {
  const milliseconds: number[] = [];
  const revisions = new Map(listed.map(({ id, revision }) => [id, revision]));
  for (let turn = 0; turn < reclassings; turn++) {
    const { id } = listed[turn % listed.length];
    const revision = revisions.get(id);
    const began = performance.now();
    const { body } = await modeller
      .post(`/api/binnings/${binningId}/reclassings`)
      .send({
        characteristics: [{ id, revision }],
        constraints: { ...constraints, mostBins: 5 + (turn % 2) },
        reason: 'Measured',
      })
      .expect(200);
    milliseconds.push(performance.now() - began);
    for (const one of (body as { characteristics: CharacteristicSummary[] }).characteristics) revisions.set(one.id, one.revision);
  }
  return waitsOf(milliseconds);
}
