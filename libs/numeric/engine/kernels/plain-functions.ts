import { CONSTANTS_DOUBLE, CONSTANTS_SINGLE } from './constants';

/** exp and log(1 + u) by basic operations alone, as the kernels take them: the same bits everywhere, which `Math.exp` does not promise. */
const fround = Math.fround;
const single = Float32Array.from(CONSTANTS_SINGLE);
const [LOG2_E, SHIFT] = single;
const EXP_SINGLE = single.subarray(2, 8);
const FAR_SINGLE = single[9];
const LOG_SINGLE = single.subarray(11, 16);
const LN2_SINGLE = single[16];

/** e^x for singles from -80 to 80. */
export function exp32(x: number): number {
  const power = fround(x * LOG2_E);
  const n = fround(fround(power + SHIFT) - SHIFT);
  const f = fround(power - n);
  let p = EXP_SINGLE[0];
  for (let k = 1; k < EXP_SINGLE.length; k++) p = fround(fround(p * f) + EXP_SINGLE[k]);
  return p * 2 ** n;
}

/** log(1 + e^-m) in singles, e = exp32(m). */
export function loss32(m: number, e: number): number {
  const inverse = fround(1 / e);
  const u = e < inverse ? e : inverse;
  const far = u > FAR_SINGLE;
  const f = far ? fround(fround(u - 1) * 0.5) : u;
  const s = fround(f / fround(2 + f));
  const z = fround(s * s);
  let p = LOG_SINGLE[0];
  for (let k = 1; k < LOG_SINGLE.length; k++) p = fround(fround(p * z) + LOG_SINGLE[k]);
  const log = fround(fround(p * s) + (far ? LN2_SINGLE : 0));
  return fround(log + (0 < -m ? -m : 0));
}

const EXP = CONSTANTS_DOUBLE.slice(4, 16);
const LOG = CONSTANTS_DOUBLE.slice(18, 26);

/** e^x for doubles from -690 to 690. Powers are taken in pairs, which is what lets a processor do several at once. */
export function exp64(x: number): number {
  const n = x * 1.4426950408889634 + 6755399441055744 - 6755399441055744;
  const f = x - n * 0.6931471803691238 - n * 1.9082149292705877e-10;
  const f2 = f * f;
  const f4 = f2 * f2;
  const low = EXP[0] + EXP[1] * f + (EXP[2] + EXP[3] * f) * f2;
  const middle = EXP[4] + EXP[5] * f + (EXP[6] + EXP[7] * f) * f2;
  const high = EXP[8] + EXP[9] * f + (EXP[10] + EXP[11] * f) * f2;
  return (low + (middle + high * f4) * f4) * 2 ** n;
}

/** log(1 + u) for doubles from 0 to 1. */
export function log64(u: number): number {
  const far = u > 0.41421356237309503;
  const f = far ? (u - 1) * 0.5 : u;
  const s = f / (2 + f);
  const z = s * s;
  const z2 = z * z;
  const low = LOG[0] + LOG[1] * z + (LOG[2] + LOG[3] * z) * z2;
  const high = LOG[4] + LOG[5] * z + (LOG[6] + LOG[7] * z) * z2;
  return (low + high * (z2 * z2)) * s + (far ? 0.6931471805599453 : 0);
}
