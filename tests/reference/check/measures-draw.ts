import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Generator } from '@tallystone/numeric';

/** Edges of the bins of score a. */
export const EDGES = [-1, 0, 0.5, 1.25];
/** Lambda of the ridge fit. */
export const PENALTY = 0.02;

/** What is measured: 600 applicants with scores and forecasts, counts and arguments of distributions. */
export interface Drawn {
  readonly y: Uint8Array;
  readonly w: Float64Array;
  readonly whole: Float64Array;
  /** A score of few values, with many ties, and one without. */
  readonly a: Float64Array;
  readonly b: Float64Array;
  readonly pd: Float64Array;
  readonly x: Float64Array[];
  readonly counts: { x: number; n: number; p: number }[];
  readonly tails: { value: number; degrees: number; probability: number }[];
}

/** Draws everything from one generator; the same seed gives the same numbers wherever it runs. */
export function draw(random: Generator): Drawn {
  const rows = 600;
  const of = (value: (i: number) => number): Float64Array => Float64Array.from({ length: rows }, (_, i) => value(i));
  const latent = of(() => random.normal());
  const y = Uint8Array.from(latent, (value) => (random.uniform() < 1 / (1 + Math.exp(-1.1 - value)) ? 1 : 0));
  const a = latent.map((value) => Math.round((value + 0.9 * random.normal()) * 4) / 4);
  const b = latent.map((value) => value + 0.6 * random.normal());
  // A forecast of 21 values, none 0 or 1.
  const pd = b.map((value) => 0.02 + Math.round(20 / (1 + Math.exp(1.2 + value))) * 0.045);
  const x = Array.from({ length: 5 }, (_, j) => latent.map((value) => 0.3 * j * value + random.normal()));
  const counts = Array.from({ length: 40 }, (_, i) => {
    const n = 1 + random.below(i % 2 === 0 ? 60 : 5000);
    const x = i < 3 ? 0 : i < 6 ? n : random.below(n + 1);
    return { x, n, p: 0.001 + 0.4 * random.uniform() };
  });
  const tails = Array.from({ length: 40 }, (_, i) => ({
    value: 10 + 60 * random.uniform() * (i % 4),
    degrees: 1 + random.below(30),
    probability: i % 2 === 0 ? random.uniform() : 10 ** (-1 - 6 * random.uniform()),
  }));
  return {
    y,
    w: of(() => 0.1 + 2 * random.uniform()),
    whole: of(() => 1 + random.below(3)),
    a,
    b,
    pd,
    x,
    counts,
    tails,
  };
}

/** Writes it as the files that the scripts read. */
export function write(folder: string, { y, w, whole, a, b, pd, x, counts, tails }: Drawn): void {
  const save = (name: string, head: string[], lines: number[][]): void =>
    writeFileSync(join(folder, `${name}.csv`), [head, ...lines].map((line) => line.join(',')).join('\n') + '\n');
  save(
    'rows',
    ['y', 'w', 'whole', 'a', 'b', 'pd', ...x.map((_, j) => `x${j + 1}`)],
    Array.from(y, (good, i) => [good, w[i], whole[i], a[i], b[i], pd[i], ...x.map((column) => column[i])]),
  );
  save(
    'counts',
    ['x', 'n', 'p'],
    counts.map((line) => [line.x, line.n, line.p]),
  );
  save(
    'tails',
    ['value', 'degrees', 'probability'],
    tails.map((line) => [line.value, line.degrees, line.probability]),
  );
  save('fit', ['lambda'], [[PENALTY]]);
}
