/**
 * The compression function of SHA-256 (FIPS 180-4, 6.2.2) in AssemblyScript, on four messages at once: each vector holds one word of each. The caller
 * lays the constants at CONSTANTS, the states at STATE and the first sixteen words of the blocks at WORDS (`keyed-hash.ts` has the same places).
 */
const CONSTANTS: usize = 0;
const STATE: usize = 512;
const WORDS: usize = 1024;

// @ts-ignore: decorator
@inline function turn(x: v128, bits: i32): v128 {
  return v128.or(i32x4.shr_u(x, bits), i32x4.shl(x, 32 - bits));
}

// @ts-ignore: decorator
@inline function three(x: v128, y: v128, z: v128): v128 {
  return v128.xor(v128.xor(x, y), z);
}

// @ts-ignore: decorator
@inline function addTo(at: usize, x: v128): void {
  v128.store(at, i32x4.add(v128.load(at), x));
}

export function compress(): void {
  for (let at: usize = WORDS + 256; at < WORDS + 1024; at += 16) {
    const x = v128.load(at - 240);
    const y = v128.load(at - 32);
    const s0 = three(turn(x, 7), turn(x, 18), i32x4.shr_u(x, 3));
    const s1 = three(turn(y, 17), turn(y, 19), i32x4.shr_u(y, 10));
    v128.store(at, i32x4.add(i32x4.add(v128.load(at - 256), s0), i32x4.add(v128.load(at - 112), s1)));
  }
  let a = v128.load(STATE);
  let b = v128.load(STATE + 16);
  let c = v128.load(STATE + 32);
  let d = v128.load(STATE + 48);
  let e = v128.load(STATE + 64);
  let f = v128.load(STATE + 80);
  let g = v128.load(STATE + 96);
  let h = v128.load(STATE + 112);
  for (let t: usize = 0; t < 64; t++) {
    const constant = i32x4.splat(load<i32>(CONSTANTS + (t << 2)));
    const s1 = three(turn(e, 6), turn(e, 11), turn(e, 25));
    const chosen = v128.bitselect(f, g, e);
    const one = i32x4.add(i32x4.add(i32x4.add(h, s1), i32x4.add(chosen, constant)), v128.load(WORDS + (t << 4)));
    const s0 = three(turn(a, 2), turn(a, 13), turn(a, 22));
    const majority = v128.bitselect(c, a, v128.xor(a, b));
    h = g;
    g = f;
    f = e;
    e = i32x4.add(d, one);
    d = c;
    c = b;
    b = a;
    a = i32x4.add(one, i32x4.add(s0, majority));
  }
  addTo(STATE, a);
  addTo(STATE + 16, b);
  addTo(STATE + 32, c);
  addTo(STATE + 48, d);
  addTo(STATE + 64, e);
  addTo(STATE + 80, f);
  addTo(STATE + 96, g);
  addTo(STATE + 112, h);
}
