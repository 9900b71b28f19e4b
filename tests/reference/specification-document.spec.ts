import { readFileSync } from 'node:fs';
import { parseSpecification } from '@tallystone/contracts/specification/schema';
import { sections } from '@tallystone/contracts/specification/sections';
import { readForReplay } from '../../server/src/reading/index';
import { fingerprint, replay } from '../../server/src/replay/index';
import { describe, expect, it } from 'vitest';

/** docs/specification.md is run as it stands: its sample, its specification, its result. */
const page = readFileSync(new URL('../../docs/specification.md', import.meta.url), 'utf8');

function block(kind: string): string {
  const found = new RegExp(`\`\`\`${kind}\\n([\\s\\S]*?)\`\`\``).exec(page);
  if (found === null) throw new Error(`no ${kind} block`);
  return found[1];
}

async function* inOne(text: string): AsyncGenerator<Buffer> {
  yield await Promise.resolve(Buffer.from(text));
}

/** Numbers to six digits, as the page prints them. */
function rounded(value: unknown): unknown {
  if (typeof value === 'number') return Number(value.toFixed(6));
  if (Array.isArray(value)) return value.map(rounded);
  if (typeof value === 'object' && value !== null)
    return Object.fromEntries(Object.entries(value).map(([key, inner]) => [key, rounded(inner)]));
  return value;
}

describe('the page on the specification', () => {
  it('shows an example that gives the result it prints', async () => {
    const json: unknown = JSON.parse(block('json'));
    const parsed = parseSpecification(json);
    if ('problems' in parsed) throw new Error(JSON.stringify(parsed.problems));
    const { specification } = parsed;
    const { source, sha256, rows } = await readForReplay(inOne(block('csv')), specification);
    const { result } = replay({
      specification,
      specificationSha256: fingerprint(json),
      dataSha256: sha256,
      source,
      version: '0',
    });
    const printed = JSON.parse(block('json result')) as object;
    expect(rounded(result)).toMatchObject(printed);
    expect(page).toContain(
      `${rows} rows read, ${result.kept} of ${result.characteristics.length} characteristics kept, result in result.json`,
    );
    // By hand from the sample: 15 development rows after one exclusion, 6 bad; owner: 5 goods, 1 bad; smoothing as "parents" has no good.
    expect(result.counts.development).toMatchObject({ rows: 15, goods: 9, bads: 6 });
    expect(result.characteristics[1].bins[0].woe).toBeCloseTo(Math.log(5.5 / 10.5 / (1.5 / 7.5)), 12);
  });

  it('names every key of the format', () => {
    for (const key of Object.keys(sections)) expect(page).toContain(`\`${key}`);
  });
});
