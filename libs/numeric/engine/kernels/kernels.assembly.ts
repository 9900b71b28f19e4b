/**
 * The kernels in AssemblyScript: passes over the codes of rows that give residuals summed by bin for several models ("lanes") at once, and a weighted
 * Gram matrix. `plain.ts` holds the same in TypeScript, operation by operation, and the tests hold the two to the same bits. No relaxed instruction
 * is used, so that every machine gives the same numbers. `descriptor.ts` says what the words of a description are.
 */
import {
  BINS, BLOCK, BLOCK_TABLE, CHUNK_TABLE, CODES, COLUMNS, COLUMN_TABLE, CONSTANTS_AT, CONTRIBUTIONS, COUNTS, ETA_COUNT, ETA_LIST, GRADIENT_COUNT, GRADIENT_LIST,
  GRAM_RESULTS, GRAM_SIZE, GRAM_UNITS, GRAM_VALUES, INTERCEPTS, LINEAR, LINEAR_SLOPES, LINEAR_VALUES, LOSS_VECTORS, MODE, OFFSETS, PACKS,
  PACK_TABLE, RESULTS, RESULT_BYTES, SIGNED_WEIGHTS, SINGLES, TABLES, VECTORS,
} from './descriptor';

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function word(description: usize, place: i32): i32 {
  return load<i32>(description + (<usize>place << 2));
}

// --- Single precision: exp, the residual ---------------------------------------------------------------------------------

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function single(k: usize): v128 {
  return v128.load(CONSTANTS_AT + (k << 4));
}

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function step32(p: v128, f: v128, k: usize): v128 {
  return f32x4.add(f32x4.mul(p, f), single(k));
}

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function exp32(x: v128): v128 {
  const power = f32x4.mul(x, single(0));
  const shifted = f32x4.add(power, single(1));
  const f = f32x4.sub(power, f32x4.sub(shifted, single(1)));
  let p = step32(single(2), f, 3);
  p = step32(p, f, 4);
  p = step32(p, f, 5);
  p = step32(p, f, 6);
  p = step32(p, f, 7);
  return i32x4.add(p, i32x4.shl(shifted, 23));
}

/** eta with the sign of the outcome: positive where the model is right. */
// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function margin32(eta: v128, signed: v128): v128 {
  const m = v128.xor(eta, v128.andnot(i32x4.splat(0x80000000), signed));
  return f32x4.pmax(single(18), f32x4.pmin(single(17), m));
}

/** log(1 + e^-m), e = exp(m). */
// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function loss32(m: v128, e: v128): v128 {
  const u = f32x4.pmin(f32x4.div(single(8), e), e);
  const far = f32x4.gt(u, single(9));
  const f = v128.bitselect(f32x4.mul(f32x4.sub(u, single(8)), single(10)), u, far);
  const s = f32x4.div(f, f32x4.add(single(15), f));
  const z = f32x4.mul(s, s);
  let p = step32(single(11), z, 12);
  p = step32(p, z, 13);
  p = step32(p, z, 14);
  p = step32(p, z, 15);
  const log = f32x4.add(f32x4.mul(p, s), v128.and(far, single(16)));
  return f32x4.add(log, f32x4.pmax(f32x4.splat(0), f32x4.neg(m)));
}

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function upper(x: v128): v128 {
  return i8x16.shuffle(x, x, 8, 9, 10, 11, 12, 13, 14, 15, 8, 9, 10, 11, 12, 13, 14, 15);
}

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function countsAt(place: usize, offset: usize): v128 {
  return f32x4.convert_i32x4_u(i32x4.extend_low_i16x8_u(i16x8.extend_low_i8x16_u(v128.load32_zero(place + offset))));
}

// --- Single precision: the linear predictor of a block ---------------------------------------------------------------------

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function start32(V: i32, eta: usize, rows: usize, intercepts: usize, offsets: usize): void {
  const stride: usize = V << 4;
  const i0 = v128.load(intercepts);
  const i1 = V > 1 ? v128.load(intercepts, 16) : i0;
  const i2 = V > 2 ? v128.load(intercepts, 32) : i0;
  const i3 = V > 3 ? v128.load(intercepts, 48) : i0;
  let at = eta;
  for (let i: usize = 0; i < rows; i++) {
    const o = offsets ? v128.load32_splat(offsets + (i << 2)) : f32x4.splat(0);
    v128.store(at, f32x4.add(i0, o));
    if (V > 1) v128.store(at, f32x4.add(i1, o), 16);
    if (V > 2) v128.store(at, f32x4.add(i2, o), 32);
    if (V > 3) v128.store(at, f32x4.add(i3, o), 48);
    at += stride;
  }
}

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function addOne32(V: i32, eta: usize, rows: usize, t0: usize, c0: usize): void {
  const stride: usize = V << 4;
  let at = eta;
  for (let i: usize = 0; i < rows; i++) {
    const a = t0 + <usize>load<u8>(c0 + i) * stride;
    v128.store(at, f32x4.add(v128.load(at), v128.load(a)));
    if (V > 1) v128.store(at, f32x4.add(v128.load(at, 16), v128.load(a, 16)), 16);
    if (V > 2) v128.store(at, f32x4.add(v128.load(at, 32), v128.load(a, 32)), 32);
    if (V > 3) v128.store(at, f32x4.add(v128.load(at, 48), v128.load(a, 48)), 48);
    at += stride;
  }
}

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function four32(a: v128, b: v128, c: v128, d: v128, e: v128): v128 {
  return f32x4.add(a, f32x4.add(f32x4.add(b, c), f32x4.add(d, e)));
}

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function addFour32(V: i32, eta: usize, rows: usize, t0: usize, t1: usize, t2: usize, t3: usize, c: usize): void {
  const stride: usize = V << 4;
  let at = eta;
  for (let i: usize = 0; i < rows; i++) {
    const a0 = t0 + <usize>load<u8>(c + i) * stride;
    const a1 = t1 + <usize>load<u8>(c + i, 256) * stride;
    const a2 = t2 + <usize>load<u8>(c + i, 512) * stride;
    const a3 = t3 + <usize>load<u8>(c + i, 768) * stride;
    v128.store(at, four32(v128.load(at), v128.load(a0), v128.load(a1), v128.load(a2), v128.load(a3)));
    if (V > 1) v128.store(at, four32(v128.load(at, 16), v128.load(a0, 16), v128.load(a1, 16), v128.load(a2, 16), v128.load(a3, 16)), 16);
    if (V > 2) v128.store(at, four32(v128.load(at, 32), v128.load(a0, 32), v128.load(a1, 32), v128.load(a2, 32), v128.load(a3, 32)), 32);
    if (V > 3) v128.store(at, four32(v128.load(at, 48), v128.load(a0, 48), v128.load(a1, 48), v128.load(a2, 48), v128.load(a3, 48)), 48);
    at += stride;
  }
}

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function addLinear32(V: i32, eta: usize, rows: usize, slopes: usize, values: usize): void {
  const stride: usize = V << 4;
  const s0 = v128.load(slopes);
  const s1 = V > 1 ? v128.load(slopes, 16) : s0;
  const s2 = V > 2 ? v128.load(slopes, 32) : s0;
  const s3 = V > 3 ? v128.load(slopes, 48) : s0;
  let at = eta;
  for (let i: usize = 0; i < rows; i++) {
    const x = v128.load32_splat(values + (i << 2));
    v128.store(at, f32x4.add(v128.load(at), f32x4.mul(x, s0)));
    if (V > 1) v128.store(at, f32x4.add(v128.load(at, 16), f32x4.mul(x, s1)), 16);
    if (V > 2) v128.store(at, f32x4.add(v128.load(at, 32), f32x4.mul(x, s2)), 32);
    if (V > 3) v128.store(at, f32x4.add(v128.load(at, 48), f32x4.mul(x, s3)), 48);
    at += stride;
  }
}

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function predict32(V: i32, description: usize, block: usize, rows: usize, eta: usize): void {
  const packs = <usize>word(description, PACKS);
  const offsets = <usize>word(description, OFFSETS);
  const tables = <usize>word(description, TABLES);
  const packTable = <usize>word(description, PACK_TABLE);
  const codes = <usize>word(description, CODES) + block * packs * BLOCK;
  const list = <usize>word(description, ETA_LIST);
  const count = <usize>word(description, ETA_COUNT);
  const linear = <usize>word(description, LINEAR);
  start32(V, eta, rows, <usize>word(description, INTERCEPTS), offsets ? offsets + block * (BLOCK * 4) : 0);
  let k: usize = 0;
  while (k < count) {
    const p0 = <usize>load<i32>(list + (k << 2));
    const t0 = tables + <usize>load<i32>(packTable + (p0 << 4)) * (V << 4);
    // Four packs that follow one another are taken together: eta is then read and written once for the four.
    if (k + 3 < count && <usize>load<i32>(list + (k << 2), 12) == p0 + 3) {
      const t1 = tables + <usize>load<i32>(packTable + (p0 << 4), 16) * (V << 4);
      const t2 = tables + <usize>load<i32>(packTable + (p0 << 4), 32) * (V << 4);
      const t3 = tables + <usize>load<i32>(packTable + (p0 << 4), 48) * (V << 4);
      addFour32(V, eta, rows, t0, t1, t2, t3, codes + p0 * BLOCK);
      k += 4;
    } else {
      addOne32(V, eta, rows, t0, codes + p0 * BLOCK);
      k += 1;
    }
  }
  const slopes = <usize>word(description, LINEAR_SLOPES);
  const values = <usize>word(description, LINEAR_VALUES) + block * linear * (BLOCK * 4);
  for (let j: usize = 0; j < linear; j++) addLinear32(V, eta, rows, slopes + j * (V << 4), values + j * (BLOCK * 4));
}

// --- Single precision: residuals of a block ---------------------------------------------------------------------------------

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function residual32(eta: v128, signed: v128): v128 {
  return f32x4.div(signed, f32x4.add(single(8), exp32(margin32(eta, signed))));
}

/** Writes residuals over eta; adds their sums to `sums` (doubles, one per lane). */
// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function residuals32(V: i32, counted: bool, eta: usize, rows: usize, signed: usize, counts: usize, sums: usize): void {
  const stride: usize = V << 4;
  let g0 = f32x4.splat(0);
  let g1 = f32x4.splat(0);
  let g2 = f32x4.splat(0);
  let g3 = f32x4.splat(0);
  let at = eta;
  for (let i: usize = 0; i < rows; i++) {
    const w = v128.load32_splat(signed + (i << 2));
    const c = counts + i * (V << 2);
    let r = residual32(v128.load(at), w);
    if (counted) r = f32x4.mul(r, countsAt(c, 0));
    g0 = f32x4.add(g0, r);
    v128.store(at, r);
    if (V > 1) {
      r = residual32(v128.load(at, 16), w);
      if (counted) r = f32x4.mul(r, countsAt(c, 4));
      g1 = f32x4.add(g1, r);
      v128.store(at, r, 16);
    }
    if (V > 2) {
      r = residual32(v128.load(at, 32), w);
      if (counted) r = f32x4.mul(r, countsAt(c, 8));
      g2 = f32x4.add(g2, r);
      v128.store(at, r, 32);
    }
    if (V > 3) {
      r = residual32(v128.load(at, 48), w);
      if (counted) r = f32x4.mul(r, countsAt(c, 12));
      g3 = f32x4.add(g3, r);
      v128.store(at, r, 48);
    }
    at += stride;
  }
  flush32(sums, g0);
  if (V > 1) flush32(sums + 32, g1);
  if (V > 2) flush32(sums + 64, g2);
  if (V > 3) flush32(sums + 96, g3);
}

/** Adds four singles to four doubles. */
// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function flush32(at: usize, x: v128): void {
  v128.store(at, f64x2.add(v128.load(at), f64x2.promote_low_f32x4(x)));
  v128.store(at, f64x2.add(v128.load(at, 16), f64x2.promote_low_f32x4(upper(x))), 16);
}

/** Losses of one vector of lanes, before eta is overwritten. */
function losses32(stride: usize, eta: usize, rows: usize, signed: usize, sums: usize): void {
  let low = v128.load(sums);
  let high = v128.load(sums, 16);
  for (let i: usize = 0; i < rows; i++) {
    const w = v128.load32_splat(signed + (i << 2));
    const m = margin32(v128.load(eta + i * stride), w);
    const l = f32x4.mul(f32x4.abs(w), loss32(m, exp32(m)));
    low = f64x2.add(low, f64x2.promote_low_f32x4(l));
    high = f64x2.add(high, f64x2.promote_low_f32x4(upper(l)));
  }
  v128.store(sums, low);
  v128.store(sums, high, 16);
}

/** Weights in place of residuals: what standardisation of a lane needs. */
// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function weights32(V: i32, counted: bool, eta: usize, rows: usize, signed: usize, counts: usize): void {
  let at = eta;
  for (let i: usize = 0; i < rows; i++) {
    const w = f32x4.abs(v128.load32_splat(signed + (i << 2)));
    const c = counts + i * (V << 2);
    for (let v: usize = 0; v < <usize>V; v++) {
      v128.store(at, counted ? f32x4.mul(w, countsAt(c, v << 2)) : w);
      at += 16;
    }
  }
}

// --- Single precision: sums of residuals by code --------------------------------------------------------------------------------

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function sumOne32(V: i32, residuals: usize, rows: usize, h0: usize, c0: usize): void {
  const stride: usize = V << 4;
  let at = residuals;
  for (let i: usize = 0; i < rows; i++) {
    const a = h0 + <usize>load<u8>(c0 + i) * stride;
    v128.store(a, f32x4.add(v128.load(a), v128.load(at)));
    if (V > 1) v128.store(a, f32x4.add(v128.load(a, 16), v128.load(at, 16)), 16);
    if (V > 2) v128.store(a, f32x4.add(v128.load(a, 32), v128.load(at, 32)), 32);
    if (V > 3) v128.store(a, f32x4.add(v128.load(a, 48), v128.load(at, 48)), 48);
    at += stride;
  }
}

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function sumFour32(V: i32, residuals: usize, rows: usize, h0: usize, h1: usize, h2: usize, h3: usize, c: usize): void {
  const stride: usize = V << 4;
  let at = residuals;
  for (let i: usize = 0; i < rows; i++) {
    const a0 = h0 + <usize>load<u8>(c + i) * stride;
    const a1 = h1 + <usize>load<u8>(c + i, 256) * stride;
    const a2 = h2 + <usize>load<u8>(c + i, 512) * stride;
    const a3 = h3 + <usize>load<u8>(c + i, 768) * stride;
    const r0 = v128.load(at);
    const r1 = V > 1 ? v128.load(at, 16) : r0;
    const r2 = V > 2 ? v128.load(at, 32) : r0;
    const r3 = V > 3 ? v128.load(at, 48) : r0;
    v128.store(a0, f32x4.add(v128.load(a0), r0));
    if (V > 1) v128.store(a0, f32x4.add(v128.load(a0, 16), r1), 16);
    if (V > 2) v128.store(a0, f32x4.add(v128.load(a0, 32), r2), 32);
    if (V > 3) v128.store(a0, f32x4.add(v128.load(a0, 48), r3), 48);
    v128.store(a1, f32x4.add(v128.load(a1), r0));
    if (V > 1) v128.store(a1, f32x4.add(v128.load(a1, 16), r1), 16);
    if (V > 2) v128.store(a1, f32x4.add(v128.load(a1, 32), r2), 32);
    if (V > 3) v128.store(a1, f32x4.add(v128.load(a1, 48), r3), 48);
    v128.store(a2, f32x4.add(v128.load(a2), r0));
    if (V > 1) v128.store(a2, f32x4.add(v128.load(a2, 16), r1), 16);
    if (V > 2) v128.store(a2, f32x4.add(v128.load(a2, 32), r2), 32);
    if (V > 3) v128.store(a2, f32x4.add(v128.load(a2, 48), r3), 48);
    v128.store(a3, f32x4.add(v128.load(a3), r0));
    if (V > 1) v128.store(a3, f32x4.add(v128.load(a3, 16), r1), 16);
    if (V > 2) v128.store(a3, f32x4.add(v128.load(a3, 32), r2), 32);
    if (V > 3) v128.store(a3, f32x4.add(v128.load(a3, 48), r3), 48);
    at += stride;
  }
}

/** Sums of residual times value over the rows of a block, in singles, then added to the doubles at `sums`. */
// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function sumLinear32(V: i32, residuals: usize, rows: usize, values: usize, sums: usize): void {
  const stride: usize = V << 4;
  let g0 = f32x4.splat(0);
  let g1 = f32x4.splat(0);
  let g2 = f32x4.splat(0);
  let g3 = f32x4.splat(0);
  let at = residuals;
  for (let i: usize = 0; i < rows; i++) {
    const x = v128.load32_splat(values + (i << 2));
    g0 = f32x4.add(g0, f32x4.mul(x, v128.load(at)));
    if (V > 1) g1 = f32x4.add(g1, f32x4.mul(x, v128.load(at, 16)));
    if (V > 2) g2 = f32x4.add(g2, f32x4.mul(x, v128.load(at, 32)));
    if (V > 3) g3 = f32x4.add(g3, f32x4.mul(x, v128.load(at, 48)));
    at += stride;
  }
  flush32(sums, g0);
  if (V > 1) flush32(sums + 32, g1);
  if (V > 2) flush32(sums + 64, g2);
  if (V > 3) flush32(sums + 96, g3);
}

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function chunk32(V: i32, description: usize, chunk: usize, scratch: usize): void {
  const stride: usize = V << 4;
  const packs = <usize>word(description, PACKS);
  const packTable = <usize>word(description, PACK_TABLE);
  const list = <usize>word(description, GRADIENT_LIST);
  const count = <usize>word(description, GRADIENT_COUNT);
  const linear = <usize>word(description, LINEAR);
  const bins = <usize>word(description, BINS);
  const results = <usize>word(description, RESULTS) + chunk * <usize>word(description, RESULT_BYTES);
  const lanes: usize = V << 5;
  const linearSums = results + bins * lanes;
  const sums = linearSums + linear * lanes;
  const losses = sums + lanes;
  memory.fill(results, 0, <usize>word(description, RESULT_BYTES));
  const eta = scratch;
  const sumsByCode = scratch + <usize>BLOCK * stride;
  for (let k: usize = 0; k < count; k++) {
    const pack = packTable + (<usize>load<i32>(list + (k << 2)) << 4);
    memory.fill(sumsByCode + <usize>load<i32>(pack) * stride, 0, <usize>load<i32>(pack, 4) * stride);
  }
  const counts = <usize>word(description, COUNTS);
  const mode = word(description, MODE);
  const chunkAt = <usize>word(description, CHUNK_TABLE) + (chunk << 3);
  const first = <usize>load<i32>(chunkAt);
  const end = first + <usize>load<i32>(chunkAt, 4);
  for (let block = first; block < end; block++) {
    const blockAt = <usize>word(description, BLOCK_TABLE) + (block << 3);
    const rows = <usize>load<i32>(blockAt);
    const fold = <usize>load<i32>(blockAt, 4);
    const signed = <usize>word(description, SIGNED_WEIGHTS) + block * (BLOCK * 4);
    const countsHere = counts + block * (BLOCK * (V << 2));
    if (mode == 0) {
      predict32(V, description, block, rows, eta);
      const vector = load<i32>(<usize>word(description, LOSS_VECTORS) + (fold << 2));
      if (vector >= 0) losses32(stride, eta + (<usize>vector << 4), rows, signed, losses + (<usize>vector << 5));
      if (counts) residuals32(V, true, eta, rows, signed, countsHere, sums);
      else residuals32(V, false, eta, rows, signed, countsHere, sums);
    } else if (counts) weights32(V, true, eta, rows, signed, countsHere);
    else weights32(V, false, eta, rows, signed, countsHere);
    const codes = <usize>word(description, CODES) + block * packs * BLOCK;
    let k: usize = 0;
    while (k < count) {
      const p0 = <usize>load<i32>(list + (k << 2));
      const h0 = sumsByCode + <usize>load<i32>(packTable + (p0 << 4)) * stride;
      if (k + 3 < count && <usize>load<i32>(list + (k << 2), 12) == p0 + 3) {
        const h1 = sumsByCode + <usize>load<i32>(packTable + (p0 << 4), 16) * stride;
        const h2 = sumsByCode + <usize>load<i32>(packTable + (p0 << 4), 32) * stride;
        const h3 = sumsByCode + <usize>load<i32>(packTable + (p0 << 4), 48) * stride;
        sumFour32(V, eta, rows, h0, h1, h2, h3, codes + p0 * BLOCK);
        k += 4;
      } else {
        sumOne32(V, eta, rows, h0, codes + p0 * BLOCK);
        k += 1;
      }
    }
    const values = <usize>word(description, LINEAR_VALUES) + block * linear * (BLOCK * 4);
    for (let j: usize = 0; j < linear; j++) sumLinear32(V, eta, rows, values + j * (BLOCK * 4), linearSums + j * lanes);
  }
  // From codes of packs to bins of columns, in double precision.
  const columnTable = <usize>word(description, COLUMN_TABLE);
  for (let k: usize = 0; k < count; k++) {
    const pack = packTable + (<usize>load<i32>(list + (k << 2)) << 4);
    const from = sumsByCode + <usize>load<i32>(pack) * stride;
    const codesOfPack = <usize>load<i32>(pack, 4);
    const firstColumn = <usize>load<i32>(pack, 8);
    const lastColumn = firstColumn + <usize>load<i32>(pack, 12);
    for (let j = firstColumn; j < lastColumn; j++) {
      const to = results + <usize>load<i32>(columnTable + (j << 3)) * lanes;
      const decode = <usize>load<i32>(columnTable + (j << 3), 4);
      for (let code: usize = 0; code < codesOfPack; code++) {
        const bin = to + <usize>load<u8>(decode + code) * lanes;
        for (let v: usize = 0; v < <usize>V; v++) flush32(bin + (v << 5), v128.load(from + code * stride + (v << 4)));
      }
    }
  }
}

/** One chunk of a pass in single precision. `scratch` holds a block of eta and the sums by code. */
export function pass32(description: usize, chunk: i32, scratch: usize): void {
  const vectors = word(description, VECTORS);
  if (vectors == 1) chunk32(1, description, chunk, scratch);
  else if (vectors == 2) chunk32(2, description, chunk, scratch);
  else if (vectors == 3) chunk32(3, description, chunk, scratch);
  else chunk32(4, description, chunk, scratch);
}

/** Fills TABLES of the packs that take part from CONTRIBUTIONS: the partial linear predictor of a pack's code is the sum over its columns, taken in double precision. */
export function spread32(description: usize): void {
  const vectors = <usize>word(description, VECTORS);
  const list = <usize>word(description, ETA_LIST);
  const count = <usize>word(description, ETA_COUNT);
  const packTable = <usize>word(description, PACK_TABLE);
  const columnTable = <usize>word(description, COLUMN_TABLE);
  const contributions = <usize>word(description, CONTRIBUTIONS);
  for (let k: usize = 0; k < count; k++) {
    const pack = packTable + (<usize>load<i32>(list + (k << 2)) << 4);
    let to = <usize>word(description, TABLES) + <usize>load<i32>(pack) * (vectors << 4);
    const codesOfPack = <usize>load<i32>(pack, 4);
    const firstColumn = <usize>load<i32>(pack, 8);
    const lastColumn = firstColumn + <usize>load<i32>(pack, 12);
    for (let code: usize = 0; code < codesOfPack; code++) {
      for (let v: usize = 0; v < vectors; v++) {
        let low = f64x2.splat(0);
        let high = f64x2.splat(0);
        for (let j = firstColumn; j < lastColumn; j++) {
          const at = columnTable + (j << 3);
          const bin = <usize>load<i32>(at) + <usize>load<u8>(<usize>load<i32>(at, 4) + code);
          const from = contributions + ((bin * vectors + v) << 5);
          low = f64x2.add(low, v128.load(from));
          high = f64x2.add(high, v128.load(from, 16));
        }
        const a = f32x4.demote_f64x2_zero(low);
        const b = f32x4.demote_f64x2_zero(high);
        v128.store(to, i8x16.shuffle(a, b, 0, 1, 2, 3, 4, 5, 6, 7, 16, 17, 18, 19, 20, 21, 22, 23));
        to += 16;
      }
    }
  }
}

// --- Double precision ----------------------------------------------------------------------------------------------------------

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function double(k: usize): v128 {
  return v128.load(CONSTANTS_AT + SINGLES * 16 + (k << 4));
}

/** Four neighbouring powers: a + b x + (c + d x) x^2. */
// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function four64(k: usize, x: v128, square: v128): v128 {
  const low = f64x2.add(double(k), f64x2.mul(double(k + 1), x));
  return f64x2.add(low, f64x2.mul(f64x2.add(double(k + 2), f64x2.mul(double(k + 3), x)), square));
}

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function exp64(x: v128): v128 {
  const shifted = f64x2.add(f64x2.mul(x, double(0)), double(1));
  const n = f64x2.sub(shifted, double(1));
  let f = f64x2.sub(x, f64x2.mul(n, double(2)));
  f = f64x2.sub(f, f64x2.mul(n, double(3)));
  const f2 = f64x2.mul(f, f);
  const f4 = f64x2.mul(f2, f2);
  const upperPowers = f64x2.add(four64(8, f, f2), f64x2.mul(four64(12, f, f2), f4));
  const p = f64x2.add(four64(4, f, f2), f64x2.mul(upperPowers, f4));
  return i64x2.add(p, i64x2.shl(shifted, 52));
}

/** log(1 + u), u from 0 to 1, by 2 atanh(f / (2 + f)). */
// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function log64(u: v128): v128 {
  const far = f64x2.gt(u, double(16));
  const f = v128.bitselect(f64x2.mul(f64x2.sub(u, double(4)), double(17)), u, far);
  const s = f64x2.div(f, f64x2.add(double(18), f));
  const z = f64x2.mul(s, s);
  const z2 = f64x2.mul(z, z);
  const p = f64x2.add(four64(18, z, z2), f64x2.mul(four64(22, z, z2), f64x2.mul(z2, z2)));
  return f64x2.add(f64x2.mul(p, s), v128.and(far, double(26)));
}

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function predict64(V: i32, description: usize, block: usize, rows: usize, eta: usize): void {
  const stride: usize = V << 4;
  const packs = <usize>word(description, PACKS);
  const offsets = <usize>word(description, OFFSETS);
  const intercepts = <usize>word(description, INTERCEPTS);
  const tables = <usize>word(description, TABLES);
  const packTable = <usize>word(description, PACK_TABLE);
  const codes = <usize>word(description, CODES) + block * packs * BLOCK;
  const list = <usize>word(description, ETA_LIST);
  const count = <usize>word(description, ETA_COUNT);
  let at = eta;
  for (let i: usize = 0; i < rows; i++) {
    const o = offsets ? v128.load64_splat(offsets + ((block * BLOCK + i) << 3)) : f64x2.splat(0);
    for (let v: usize = 0; v < <usize>V; v++) {
      v128.store(at, f64x2.add(v128.load(intercepts + (v << 4)), o));
      at += 16;
    }
  }
  let k: usize = 0;
  while (k < count) {
    const p0 = <usize>load<i32>(list + (k << 2));
    const t0 = tables + <usize>load<i32>(packTable + (p0 << 4)) * stride;
    const c = codes + p0 * BLOCK;
    at = eta;
    if (k + 1 < count && <usize>load<i32>(list + (k << 2), 4) == p0 + 1) {
      const t1 = tables + <usize>load<i32>(packTable + (p0 << 4), 16) * stride;
      for (let i: usize = 0; i < rows; i++) {
        const a = t0 + <usize>load<u8>(c + i) * stride;
        const b = t1 + <usize>load<u8>(c + i, 256) * stride;
        v128.store(at, f64x2.add(v128.load(at), f64x2.add(v128.load(a), v128.load(b))));
        if (V > 1) v128.store(at, f64x2.add(v128.load(at, 16), f64x2.add(v128.load(a, 16), v128.load(b, 16))), 16);
        if (V > 2) v128.store(at, f64x2.add(v128.load(at, 32), f64x2.add(v128.load(a, 32), v128.load(b, 32))), 32);
        if (V > 3) v128.store(at, f64x2.add(v128.load(at, 48), f64x2.add(v128.load(a, 48), v128.load(b, 48))), 48);
        at += stride;
      }
      k += 2;
    } else {
      for (let i: usize = 0; i < rows; i++) {
        const a = t0 + <usize>load<u8>(c + i) * stride;
        v128.store(at, f64x2.add(v128.load(at), v128.load(a)));
        if (V > 1) v128.store(at, f64x2.add(v128.load(at, 16), v128.load(a, 16)), 16);
        if (V > 2) v128.store(at, f64x2.add(v128.load(at, 32), v128.load(a, 32)), 32);
        if (V > 3) v128.store(at, f64x2.add(v128.load(at, 48), v128.load(a, 48)), 48);
        at += stride;
      }
      k += 1;
    }
  }
  const linear = <usize>word(description, LINEAR);
  const slopes = <usize>word(description, LINEAR_SLOPES);
  const values = <usize>word(description, LINEAR_VALUES) + block * linear * (BLOCK * 8);
  for (let j: usize = 0; j < linear; j++) {
    const own = values + j * (BLOCK * 8);
    at = eta;
    for (let i: usize = 0; i < rows; i++) {
      const x = v128.load64_splat(own + (i << 3));
      for (let v: usize = 0; v < <usize>V; v++) {
        v128.store(at, f64x2.add(v128.load(at), f64x2.mul(x, v128.load(slopes + j * stride + (v << 4)))));
        at += 16;
      }
    }
  }
}

/** Writes residuals over eta; adds residuals and losses to the doubles at `sums` and `losses`. */
// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function residuals64(V: i32, eta: usize, rows: usize, signed: usize, sums: usize, losses: usize): void {
  const stride: usize = V << 4;
  for (let v: usize = 0; v < <usize>V; v++) {
    let g = f64x2.splat(0);
    let l = f64x2.splat(0);
    let at = eta + (v << 4);
    for (let i: usize = 0; i < rows; i++) {
      const w = v128.load64_splat(signed + (i << 3));
      const m = v128.xor(v128.load(at), v128.andnot(i64x2.splat(0x8000000000000000), w));
      const size = f64x2.pmin(double(27), f64x2.abs(m));
      const u = exp64(f64x2.neg(size));
      const inverse = f64x2.div(double(4), f64x2.add(double(4), u));
      const right = f64x2.ge(m, f64x2.splat(0));
      const wrong = v128.bitselect(f64x2.mul(u, inverse), inverse, right);
      const r = f64x2.mul(w, wrong);
      g = f64x2.add(g, r);
      const loss = f64x2.add(log64(u), v128.andnot(size, right));
      l = f64x2.add(l, f64x2.mul(f64x2.abs(w), loss));
      v128.store(at, r);
      at += stride;
    }
    v128.store(sums + (v << 4), f64x2.add(v128.load(sums + (v << 4)), g));
    v128.store(losses + (v << 4), f64x2.add(v128.load(losses + (v << 4)), l));
  }
}

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function chunk64(V: i32, description: usize, chunk: usize, scratch: usize): void {
  const stride: usize = V << 4;
  const packs = <usize>word(description, PACKS);
  const packTable = <usize>word(description, PACK_TABLE);
  const list = <usize>word(description, GRADIENT_LIST);
  const count = <usize>word(description, GRADIENT_COUNT);
  const linear = <usize>word(description, LINEAR);
  const bins = <usize>word(description, BINS);
  const results = <usize>word(description, RESULTS) + chunk * <usize>word(description, RESULT_BYTES);
  const linearSums = results + bins * stride;
  const sums = linearSums + linear * stride;
  const losses = sums + stride;
  memory.fill(results, 0, <usize>word(description, RESULT_BYTES));
  const eta = scratch;
  const sumsByCode = scratch + <usize>BLOCK * stride;
  for (let k: usize = 0; k < count; k++) {
    const pack = packTable + (<usize>load<i32>(list + (k << 2)) << 4);
    memory.fill(sumsByCode + <usize>load<i32>(pack) * stride, 0, <usize>load<i32>(pack, 4) * stride);
  }
  const chunkAt = <usize>word(description, CHUNK_TABLE) + (chunk << 3);
  const first = <usize>load<i32>(chunkAt);
  const end = first + <usize>load<i32>(chunkAt, 4);
  for (let block = first; block < end; block++) {
    const blockAt = <usize>word(description, BLOCK_TABLE) + (block << 3);
    const rows = <usize>load<i32>(blockAt);
    predict64(V, description, block, rows, eta);
    residuals64(V, eta, rows, <usize>word(description, SIGNED_WEIGHTS) + block * (BLOCK * 8), sums, losses);
    const codes = <usize>word(description, CODES) + block * packs * BLOCK;
    let k: usize = 0;
    while (k < count) {
      const p0 = <usize>load<i32>(list + (k << 2));
      const h0 = sumsByCode + <usize>load<i32>(packTable + (p0 << 4)) * stride;
      const c = codes + p0 * BLOCK;
      let at = eta;
      if (k + 1 < count && <usize>load<i32>(list + (k << 2), 4) == p0 + 1) {
        const h1 = sumsByCode + <usize>load<i32>(packTable + (p0 << 4), 16) * stride;
        for (let i: usize = 0; i < rows; i++) {
          const a = h0 + <usize>load<u8>(c + i) * stride;
          const b = h1 + <usize>load<u8>(c + i, 256) * stride;
          const r0 = v128.load(at);
          v128.store(a, f64x2.add(v128.load(a), r0));
          v128.store(b, f64x2.add(v128.load(b), r0));
          if (V > 1) {
            const r1 = v128.load(at, 16);
            v128.store(a, f64x2.add(v128.load(a, 16), r1), 16);
            v128.store(b, f64x2.add(v128.load(b, 16), r1), 16);
          }
          if (V > 2) {
            const r2 = v128.load(at, 32);
            v128.store(a, f64x2.add(v128.load(a, 32), r2), 32);
            v128.store(b, f64x2.add(v128.load(b, 32), r2), 32);
          }
          if (V > 3) {
            const r3 = v128.load(at, 48);
            v128.store(a, f64x2.add(v128.load(a, 48), r3), 48);
            v128.store(b, f64x2.add(v128.load(b, 48), r3), 48);
          }
          at += stride;
        }
        k += 2;
      } else {
        for (let i: usize = 0; i < rows; i++) {
          const a = h0 + <usize>load<u8>(c + i) * stride;
          v128.store(a, f64x2.add(v128.load(a), v128.load(at)));
          if (V > 1) v128.store(a, f64x2.add(v128.load(a, 16), v128.load(at, 16)), 16);
          if (V > 2) v128.store(a, f64x2.add(v128.load(a, 32), v128.load(at, 32)), 32);
          if (V > 3) v128.store(a, f64x2.add(v128.load(a, 48), v128.load(at, 48)), 48);
          at += stride;
        }
        k += 1;
      }
    }
    const values = <usize>word(description, LINEAR_VALUES) + block * linear * (BLOCK * 8);
    for (let j: usize = 0; j < linear; j++) {
      for (let v: usize = 0; v < <usize>V; v++) {
        let g = f64x2.splat(0);
        let at = eta + (v << 4);
        for (let i: usize = 0; i < rows; i++) {
          g = f64x2.add(g, f64x2.mul(v128.load64_splat(values + j * (BLOCK * 8) + (i << 3)), v128.load(at)));
          at += stride;
        }
        const to = linearSums + j * stride + (v << 4);
        v128.store(to, f64x2.add(v128.load(to), g));
      }
    }
  }
  const columnTable = <usize>word(description, COLUMN_TABLE);
  for (let k: usize = 0; k < count; k++) {
    const pack = packTable + (<usize>load<i32>(list + (k << 2)) << 4);
    const from = sumsByCode + <usize>load<i32>(pack) * stride;
    const codesOfPack = <usize>load<i32>(pack, 4);
    const firstColumn = <usize>load<i32>(pack, 8);
    const lastColumn = firstColumn + <usize>load<i32>(pack, 12);
    for (let j = firstColumn; j < lastColumn; j++) {
      const to = results + <usize>load<i32>(columnTable + (j << 3)) * stride;
      const decode = <usize>load<i32>(columnTable + (j << 3), 4);
      for (let code: usize = 0; code < codesOfPack; code++) {
        const bin = to + <usize>load<u8>(decode + code) * stride;
        for (let v: usize = 0; v < <usize>V; v++) {
          v128.store(bin + (v << 4), f64x2.add(v128.load(bin + (v << 4)), v128.load(from + code * stride + (v << 4))));
        }
      }
    }
  }
}

/** One chunk of a pass in double precision; the losses of all lanes are summed. */
export function pass64(description: usize, chunk: i32, scratch: usize): void {
  const vectors = word(description, VECTORS);
  if (vectors == 1) chunk64(1, description, chunk, scratch);
  else if (vectors == 2) chunk64(2, description, chunk, scratch);
  else if (vectors == 3) chunk64(3, description, chunk, scratch);
  else chunk64(4, description, chunk, scratch);
}

/** As `spread32`, in double precision. */
export function spread64(description: usize): void {
  const vectors = <usize>word(description, VECTORS);
  const list = <usize>word(description, ETA_LIST);
  const count = <usize>word(description, ETA_COUNT);
  const packTable = <usize>word(description, PACK_TABLE);
  const columnTable = <usize>word(description, COLUMN_TABLE);
  const contributions = <usize>word(description, CONTRIBUTIONS);
  for (let k: usize = 0; k < count; k++) {
    const pack = packTable + (<usize>load<i32>(list + (k << 2)) << 4);
    let to = <usize>word(description, TABLES) + <usize>load<i32>(pack) * (vectors << 4);
    const codesOfPack = <usize>load<i32>(pack, 4);
    const firstColumn = <usize>load<i32>(pack, 8);
    const lastColumn = firstColumn + <usize>load<i32>(pack, 12);
    for (let code: usize = 0; code < codesOfPack; code++) {
      for (let v: usize = 0; v < vectors; v++) {
        let sum = f64x2.splat(0);
        for (let j = firstColumn; j < lastColumn; j++) {
          const at = columnTable + (j << 3);
          const bin = <usize>load<i32>(at) + <usize>load<u8>(<usize>load<i32>(at, 4) + code);
          sum = f64x2.add(sum, v128.load(contributions + ((bin * vectors + v) << 4)));
        }
        v128.store(to, sum);
        to += 16;
      }
    }
  }
}

// --- The Gram matrix -------------------------------------------------------------------------------------------------------------

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function total(x: v128): f64 {
  return <f64>f32x4.extract_lane(x, 0) + <f64>f32x4.extract_lane(x, 1) + (<f64>f32x4.extract_lane(x, 2) + <f64>f32x4.extract_lane(x, 3));
}

// @ts-ignore: AssemblyScript puts a decorator before a function, TypeScript does not know that
@inline function addTotal(at: usize, x: v128): void {
  store<f64>(at, load<f64>(at) + total(x));
}

/**
 * One unit of the Gram matrix of (1, columns), weighted by w P (1 - P) at the linear predictor of lane 0 (VECTORS = 1). Products are summed in
 * singles over a block and then added in doubles.
 */
export function gram(description: usize, unit: i32, scratch: usize): void {
  const size = <usize>word(description, GRAM_SIZE);
  const columns = <usize>word(description, COLUMNS);
  const linear = <usize>word(description, LINEAR);
  const packs = <usize>word(description, PACKS);
  const packTable = <usize>word(description, PACK_TABLE);
  const valueTable = <usize>word(description, GRAM_VALUES);
  const to = <usize>word(description, GRAM_RESULTS) + <usize>unit * size * size * 8;
  memory.fill(to, 0, size * size * 8);
  const eta = scratch;
  const slices = scratch + BLOCK * 16;
  memory.fill(slices, 0, size * (BLOCK * 4));
  const unitAt = <usize>word(description, GRAM_UNITS) + <usize>unit * 12;
  const first = <usize>load<i32>(unitAt);
  const blocks = <usize>load<i32>(unitAt, 4);
  const step = <usize>load<i32>(unitAt, 8);
  for (let k: usize = 0; k < blocks; k++) {
    const block = first + k * step;
    const rows = <usize>load<i32>(<usize>word(description, BLOCK_TABLE) + (block << 3));
    predict32(1, description, block, rows, eta);
    const signed = <usize>word(description, SIGNED_WEIGHTS) + block * (BLOCK * 4);
    const padded = (rows + 3) & ~3;
    for (let i: usize = 0; i < padded; i++) {
      let root: f32 = 0;
      if (i < rows) {
        const w = v128.load32_splat(signed + (i << 2));
        const m = margin32(v128.load(eta + (i << 4)), w);
        const e = exp32(m);
        const q = f32x4.div(single(8), f32x4.add(single(8), e));
        const curvature = f32x4.pmax(f32x4.mul(f32x4.mul(e, q), q), single(19));
        root = f32x4.extract_lane(f32x4.sqrt(f32x4.mul(f32x4.abs(w), curvature)), 0);
      }
      store<f32>(slices + (i << 2), root);
    }
    const codes = <usize>word(description, CODES) + block * packs * BLOCK;
    let slice = slices + BLOCK * 4;
    for (let p: usize = 0; p < packs; p++) {
      const pack = packTable + (p << 4);
      const firstColumn = <usize>load<i32>(pack, 8);
      const lastColumn = firstColumn + <usize>load<i32>(pack, 12);
      for (let j = firstColumn; j < lastColumn; j++) {
        const values = <usize>load<i32>(valueTable + (j << 2));
        for (let i: usize = 0; i < padded; i++) {
          const code = <usize>load<u8>(codes + p * BLOCK + i);
          store<f32>(slice + (i << 2), load<f32>(values + (code << 2)) * load<f32>(slices + (i << 2)));
        }
        slice += BLOCK * 4;
      }
    }
    const values = <usize>word(description, LINEAR_VALUES) + block * linear * (BLOCK * 4);
    for (let j: usize = 0; j < linear; j++) {
      for (let i: usize = 0; i < padded; i++) {
        store<f32>(slice + (i << 2), load<f32>(values + j * (BLOCK * 4) + (i << 2)) * load<f32>(slices + (i << 2)));
      }
      slice += BLOCK * 4;
    }
    products(slices, size, columns + 1, padded, to);
  }
}

/** Adds the products of slices to the matrix, two rows by four columns at a time. */
function products(slices: usize, size: usize, used: usize, padded: usize, to: usize): void {
  for (let a: usize = 0; a < used; a += 2) {
    const a0 = slices + a * (BLOCK * 4);
    for (let b = a & ~3; b < used; b += 4) {
      const b0 = slices + b * (BLOCK * 4);
      let s00 = f32x4.splat(0);
      let s01 = f32x4.splat(0);
      let s02 = f32x4.splat(0);
      let s03 = f32x4.splat(0);
      let s10 = f32x4.splat(0);
      let s11 = f32x4.splat(0);
      let s12 = f32x4.splat(0);
      let s13 = f32x4.splat(0);
      for (let i: usize = 0; i < padded; i += 4) {
        const x = v128.load(a0 + (i << 2));
        const y = v128.load(a0 + (i << 2), 1024);
        const p = v128.load(b0 + (i << 2));
        const q = v128.load(b0 + (i << 2), 1024);
        const r = v128.load(b0 + (i << 2), 2048);
        const s = v128.load(b0 + (i << 2), 3072);
        s00 = f32x4.add(s00, f32x4.mul(x, p));
        s01 = f32x4.add(s01, f32x4.mul(x, q));
        s02 = f32x4.add(s02, f32x4.mul(x, r));
        s03 = f32x4.add(s03, f32x4.mul(x, s));
        s10 = f32x4.add(s10, f32x4.mul(y, p));
        s11 = f32x4.add(s11, f32x4.mul(y, q));
        s12 = f32x4.add(s12, f32x4.mul(y, r));
        s13 = f32x4.add(s13, f32x4.mul(y, s));
      }
      const row = to + (a * size + b) * 8;
      addTotal(row, s00);
      addTotal(row + 8, s01);
      addTotal(row + 16, s02);
      addTotal(row + 24, s03);
      const next = row + size * 8;
      addTotal(next, s10);
      addTotal(next + 8, s11);
      addTotal(next + 16, s12);
      addTotal(next + 24, s13);
    }
  }
}
