/**
 * Seeded draws for the demo file, made only of operations whose result IEEE 754 fixes (+ - * / and 32-bit integers), so that every
 * machine writes the same bytes. Math.exp and Math.log are left out on purpose: their last digit may differ between engines.
 *
 * The generator is xoshiro128** 1.1 by Blackman and Vigna (placed in the public domain by its authors); the algorithm is written from
 * memory of its published description. Its state is filled by a 32-bit mixing sequence from the seed. It is kept here, and not taken from a
 * package, so that no upgrade can change the file.
 */
export interface Draws {
  /** In [0, 1), 32 bits. */
  uniform(): number;
  /** Mean 0, variance 1: twelve uniforms less six. Tails end at six, which is what a demo file wants. */
  normal(): number;
  /** One of the names, with probability in proportion to its weight. */
  pick<T extends string>(weights: Readonly<Record<T, number>>): T;
  /** True with this probability. */
  chance(probability: number): boolean;
}

function mixer(seed: number): () => number {
  let state = seed | 0;
  return () => {
    state = (state + 0x9e3779b9) | 0;
    let mixed = state ^ (state >>> 16);
    mixed = Math.imul(mixed, 0x85ebca6b);
    mixed ^= mixed >>> 13;
    mixed = Math.imul(mixed, 0xc2b2ae35);
    return (mixed ^ (mixed >>> 16)) >>> 0;
  };
}

const rotated = (value: number, by: number): number => (value << by) | (value >>> (32 - by));

export function drawsFrom(seed: number): Draws {
  const next = mixer(seed);
  let [a, b, c, d] = [next(), next(), next(), next()];

  const bits = (): number => {
    const result = Math.imul(rotated(Math.imul(b, 5), 7), 9) >>> 0;
    const shifted = b << 9;
    c ^= a;
    d ^= b;
    b ^= c;
    a ^= d;
    c ^= shifted;
    d = rotated(d, 11);
    return result;
  };
  const uniform = (): number => bits() / 4294967296;

  return {
    uniform,
    normal: () => {
      let sum = -6;
      for (let draw = 0; draw < 12; draw += 1) sum += uniform();
      return sum;
    },
    pick: <T extends string>(weights: Readonly<Record<T, number>>): T => {
      const names = Object.keys(weights) as T[];
      const total = names.reduce((sum, name) => sum + weights[name], 0);
      let left = uniform() * total;
      for (const name of names) {
        left -= weights[name];
        if (left < 0) return name;
      }
      return names[names.length - 1];
    },
    chance: (probability) => uniform() < probability,
  };
}

/** e^x to about 1e-15 by halving the argument and a Taylor series: only sums and products, so the same on every machine. */
export function exponential(x: number): number {
  let halvings = 0;
  let reduced = x;
  while (reduced > 0.5 || reduced < -0.5) {
    reduced /= 2;
    halvings += 1;
  }
  let term = 1;
  let sum = 1;
  for (let power = 1; power < 18; power += 1) {
    term *= reduced / power;
    sum += term;
  }
  for (let squaring = 0; squaring < halvings; squaring += 1) sum *= sum;
  return sum;
}

/** P(good) at these log odds. */
export const probabilityAt = (logOdds: number): number => 1 / (1 + exponential(-logOdds));

export const within = (value: number, lowest: number, highest: number): number => Math.min(highest, Math.max(lowest, value));
