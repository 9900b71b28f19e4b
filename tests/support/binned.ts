import type { Binning, CharacteristicDetail, CharacteristicList } from '@tallystone/contracts/binnings/schema';
import type { DefinedColumn, DraftContent } from '@tallystone/contracts/samples/definition';
import type { Visitor } from './intake';

/** A generator of its own, so that the file is the same on every machine (Park and Miller, CACM 31, 1988). */
function seeded(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state * 48271) % 2147483647;
    return state / 2147483647;
  };
}

/** Invented applicants whose risk rises with utilisation, falls with age and differs by home. */
export function applicantsWithRisk(rows = 3000): string {
  const random = seeded(20231);
  const lines = ['application_id,applied_on,age,utilisation,home,region,branch_code,gender,bad'];
  for (let row = 0; row < rows; row++) {
    const age = 18 + Math.floor(random() * 60);
    const utilisation = Math.round(random() * 1000) / 10;
    const home = ['owner', 'rent', 'parents', 'other', ''][Math.min(4, Math.floor(random() * 4.6))];
    const none = random() < 0.07;
    const eta =
      1.2 +
      0.03 * (age - 45) -
      0.03 * (utilisation - 50) +
      (home === 'owner' ? 0.6 : home === 'rent' ? -0.4 : 0) -
      (none ? 0.5 : 0);
    const bad = random() < 1 / (1 + Math.exp(eta)) ? 1 : 0;
    const day = new Date(Date.UTC(2023, 0, 1 + Math.floor(random() * 900))).toISOString().slice(0, 10);
    const region = ['north', 'south', 'east', 'west'][Math.floor(random() * 4)];
    lines.push(
      [
        `SM-${row}`,
        day,
        random() < 0.03 ? '' : age,
        none ? -999 : utilisation,
        home,
        region,
        'B1',
        random() < 0.5 ? 'f' : 'm',
        bad,
      ].join(','),
    );
  }
  return `${lines.join('\n')}\n`;
}

/** A confirmed definition of that file: special code stated, gender protected, the last months out of time. */
export async function defineApplicants(
  visitor: Visitor,
  modelId: string,
  csv = applicantsWithRisk(),
  gender: Partial<DefinedColumn> = {},
): Promise<{ definitionId: string; sampleId: string }> {
  const { path, id: sampleId } = await visitor.sample(modelId, csv);
  const { body, headers } = await visitor.get(`${path}/draft`).expect(200);
  const draft = body.content as DraftContent;
  const content: DraftContent = {
    ...draft,
    columns: draft.columns.map((column) => {
      if (column.column === 'utilisation')
        return { ...column, role: 'characteristic', special: [{ label: 'no bureau record', values: [-999] }] };
      if (column.column === 'gender') return { ...column, role: 'characteristic', protected: true, citation: null, ...gender };
      if (['age', 'home', 'region', 'branch_code'].includes(column.column))
        return { ...column, role: 'characteristic', reason: column.reason ?? 'as an example' };
      return column;
    }),
    partition: { by: 'seed', seed: 7, holdOutShare: 0.3, outOfTime: { from: '2025-01-01', to: null } },
  };
  const saved = await visitor.put(`${path}/draft`).set('If-Match', headers.etag).send(content).expect(200);
  const started = await visitor
    .post(`${path}/definitions`)
    .send({ revision: saved.body.revision as number })
    .expect(202);
  const run = await visitor.ended(started.body.id as string);
  if (run.state !== 'succeeded')
    throw new Error(`The sample was not confirmed: ${JSON.stringify(run.problem)} ${JSON.stringify(saved.body.problems)}`);
  return { sampleId, definitionId: (run.result as { definitionId: string }).definitionId };
}

/** Starts a binning and waits until its characteristics are classed. */
export async function classApplicants(
  visitor: Visitor,
  modelId: string,
  definitionId: string,
  constraints: object = {},
): Promise<Binning> {
  const started = await visitor
    .post(`/api/models/${modelId}/binnings`)
    .send({ definitionId, name: 'First binning', constraints })
    .expect(201);
  const run = await visitor.ended(started.body.runId as string);
  if (run.state !== 'succeeded') throw new Error(`Not classed: ${JSON.stringify(run.problem)}`);
  return (await visitor.get(`/api/binnings/${started.body.id}`).expect(200)).body as Binning;
}

export async function characteristicsOf(visitor: Visitor, binningId: string): Promise<CharacteristicList> {
  return (await visitor.get(`/api/binnings/${binningId}/characteristics`).expect(200)).body as CharacteristicList;
}

export async function benchOf(
  visitor: Visitor,
  binningId: string,
  column: string,
): Promise<{ path: string; etag: string; detail: CharacteristicDetail }> {
  const { characteristics } = await characteristicsOf(visitor, binningId);
  const found = characteristics.find((one) => one.column === column);
  if (!found) throw new Error(`No characteristic ${column}`);
  const path = `/api/binnings/${binningId}/characteristics/${found.id}`;
  const { body, headers } = await visitor.get(path).expect(200);
  return { path, etag: headers.etag, detail: body as CharacteristicDetail };
}
