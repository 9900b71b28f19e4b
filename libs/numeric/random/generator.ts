import { requireThat } from '../checks';

/**
 * A seeded generator of our own, so that a seed gives the same numbers on every machine and with every version of every package:
 * xoshiro128** of D. Blackman and S. Vigna (2018), its state filled by a 32-bit mixing function from seed and stream. Streams of one seed are
 * independent for every practical purpose, so resample b of a study can be drawn by any worker.
 */
export class Generator {
  private a: number;
  private b: number;
  private c: number;
  private d: number;

  /**
   * @param seed and stream whole numbers of at least 0; their lower 32 bits and, of the seed, the 21 bits above count
   * @throws NumericError for what is no such number
   */
  constructor(seed: number, stream = 0) {
    requireThat(Number.isSafeInteger(seed) && seed >= 0, 'seed', `a seed is a whole number of at least 0, not ${seed}.`);
    requireThat(
      Number.isSafeInteger(stream) && stream >= 0,
      'stream',
      `a stream is a whole number of at least 0, not ${stream}.`,
    );
    let state = mix((seed >>> 0) ^ mix(Math.floor(seed / 2 ** 32) >>> 0) ^ mix((stream + 0x9e3779b9) >>> 0));
    const next = (): number => {
      state = (state + 0x9e3779b9) >>> 0;
      return mix(state);
    };
    this.a = next();
    this.b = next();
    this.c = next();
    this.d = next() | 1;
    for (let i = 0; i < 8; i++) this.uint32();
  }

  /** 32 random bits as a number from 0 to 2^32 - 1. */
  uint32(): number {
    const product = Math.imul(this.b, 5);
    const result = Math.imul((product << 7) | (product >>> 25), 9);
    const shifted = this.b << 9;
    this.c ^= this.a;
    this.d ^= this.b;
    this.b ^= this.c;
    this.a ^= this.d;
    this.c ^= shifted;
    this.d = (this.d << 11) | (this.d >>> 21);
    return result >>> 0;
  }

  /** Uniform on [0, 1), 53 bits. */
  uniform(): number {
    return ((this.uint32() >>> 5) * 67108864 + (this.uint32() >>> 6)) / 9007199254740992;
  }

  /**
   * Uniform whole number from 0 to count - 1, without bias (rejection).
   * @param count 1 to 2^32
   * @throws NumericError for a count outside
   */
  below(count: number): number {
    if (!(count >= 1 && count <= 4294967296)) requireThat(false, 'count', `there is no whole number below ${count}.`);
    const limit = 4294967296 - (4294967296 % count);
    let bits = this.uint32();
    while (bits >= limit) bits = this.uint32();
    return bits % count;
  }

  /** Standard normal by Marsaglia's polar method. */
  normal(): number {
    while (true) {
      const u = 2 * this.uniform() - 1;
      const v = 2 * this.uniform() - 1;
      const s = u * u + v * v;
      if (s > 0 && s < 1) return u * Math.sqrt((-2 * Math.log(s)) / s);
    }
  }

  /**
   * Binomial(trials, p), exact: inversion where the mean is small, else the transformed rejection method BTRS.
   * @param trials a whole number of at least 0
   * @param p 0 to 1
   * @throws NumericError for arguments outside, and for NaN
   * Source: W. Hörmann, The generation of binomial random variates, J. Statistical Computation and Simulation 46, 1993.
   */
  binomial(trials: number, p: number): number {
    requireThat(Number.isInteger(trials) && trials >= 0, 'trials', `the number of trials is ${trials}.`);
    requireThat(p >= -1e-12 && p <= 1 + 1e-12, 'p', `p is ${p}; it lies between 0 and 1.`);
    if (trials === 0 || p <= 0) return 0;
    if (p >= 1) return trials;
    if (p > 0.5) return trials - this.binomial(trials, 1 - p);
    return trials * p < 10 ? this.binomialByInversion(trials, p) : this.binomialByRejection(trials, p);
  }

  /** Waiting times between successes are geometric. */
  private binomialByInversion(trials: number, p: number): number {
    const scale = Math.log1p(-p);
    let place = 0;
    for (let count = 0; ; count++) {
      place += Math.floor(Math.log(1 - this.uniform()) / scale) + 1;
      if (place > trials) return count;
    }
  }

  private binomialByRejection(trials: number, p: number): number {
    const spread = Math.sqrt(trials * p * (1 - p));
    const b = 1.15 + 2.53 * spread;
    const a = -0.0873 + 0.0248 * b + 0.01 * p;
    const centre = trials * p + 0.5;
    const easy = 0.92 - 4.2 / b;
    const alpha = (2.83 + 5.1 / b) * spread;
    const odds = Math.log(p / (1 - p));
    const mode = Math.floor((trials + 1) * p);
    const atMode = logFactorial(mode) + logFactorial(trials - mode);
    while (true) {
      const u = this.uniform() - 0.5;
      let v = this.uniform();
      const tail = 0.5 - Math.abs(u);
      const k = Math.floor(((2 * a) / tail + b) * u + centre);
      if (k < 0 || k > trials) continue;
      if (tail >= 0.07 && v <= easy) return k;
      v = Math.log((v * alpha) / (a / (tail * tail) + b));
      if (v <= atMode - logFactorial(k) - logFactorial(trials - k) + (k - mode) * odds) return k;
    }
  }
}

function mix(value: number): number {
  let x = value >>> 0;
  x = Math.imul(x ^ (x >>> 16), 0x85ebca6b);
  x = Math.imul(x ^ (x >>> 13), 0xc2b2ae35);
  return (x ^ (x >>> 16)) >>> 0;
}

/** ln k! by Stirling's series, exact to a double from 10 on; a table below. */
function logFactorial(k: number): number {
  if (k < SMALL.length) return SMALL[k];
  const x = k + 1;
  const r = 1 / (x * x);
  return (x - 0.5) * Math.log(x) - x + 0.9189385332046727 + (1 / 12 - (1 / 360 - (1 / 1260 - r / 1680) * r) * r) / x;
}

const SMALL = (() => {
  const table = [0];
  for (let k = 1; k < 16; k++) table.push(table[k - 1] + Math.log(k));
  return table;
})();
