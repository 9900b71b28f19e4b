import {
  BINS,
  BLOCK,
  BLOCK_TABLE,
  CHUNK_TABLE,
  CODES,
  COLUMNS,
  COLUMN_TABLE,
  CONTRIBUTIONS,
  COUNTS,
  ETA_COUNT,
  ETA_LIST,
  GRADIENT_COUNT,
  GRADIENT_LIST,
  GRAM_RESULTS,
  GRAM_SIZE,
  GRAM_UNITS,
  GRAM_VALUES,
  INTERCEPTS,
  LINEAR,
  LINEAR_SLOPES,
  LINEAR_VALUES,
  LOSS_VECTORS,
  MODE,
  OFFSETS,
  PACKS,
  PACK_TABLE,
  RESULTS,
  RESULT_BYTES,
  SIGNED_WEIGHTS,
  TABLES,
  VECTORS,
} from './descriptor';
import { exp32, exp64, log64, loss32 } from './plain-functions';
import type { Kernels } from './kernels';

/**
 * The kernels in TypeScript, operation by operation as in `kernels.assembly.ts`: the oracle of those in the tests, and what runs where WebAssembly may
 * not. Sums are taken in the same order and singles are rounded where they are, so both give the same bits.
 */
export function plainKernels(buffer: ArrayBufferLike): Kernels {
  const u8 = new Uint8Array(buffer);
  const i32 = new Int32Array(buffer);
  const f32 = new Float32Array(buffer);
  const f64 = new Float64Array(buffer);
  const fround = Math.fround;
  const word = (description: number, place: number): number => i32[(description >> 2) + place];

  /** The lists, four (or two) neighbours at a time as the kernels take them: what is added first decides the last bit. */
  const grouped = (list: number, count: number, width: number, take: (pack: number, together: number) => void): void => {
    let k = 0;
    while (k < count) {
      const pack = i32[(list >> 2) + k];
      const together = k + width - 1 < count && i32[(list >> 2) + k + width - 1] === pack + width - 1 ? width : 1;
      take(pack, together);
      k += together;
    }
  };

  function predict32(description: number, lanes: number, block: number, rows: number, eta: number): void {
    const packs = word(description, PACKS);
    const offsets = word(description, OFFSETS);
    const intercepts = word(description, INTERCEPTS) >> 2;
    const codes = word(description, CODES) + block * packs * BLOCK;
    const tables = word(description, TABLES) >> 2;
    const packTable = word(description, PACK_TABLE) >> 2;
    for (let i = 0; i < rows; i++) {
      const o = offsets ? f32[(offsets >> 2) + block * BLOCK + i] : 0;
      for (let l = 0; l < lanes; l++) f32[eta + i * lanes + l] = f32[intercepts + l] + o;
    }
    grouped(word(description, ETA_LIST), word(description, ETA_COUNT), 4, (pack, together) => {
      const at = (p: number, i: number): number =>
        tables + (i32[packTable + (pack + p) * 4] + u8[codes + (pack + p) * BLOCK + i]) * lanes;
      for (let i = 0; i < rows; i++) {
        for (let l = 0; l < lanes; l++) {
          const first = f32[at(0, i) + l];
          const sum =
            together === 1 ? first : fround(fround(first + f32[at(1, i) + l]) + fround(f32[at(2, i) + l] + f32[at(3, i) + l]));
          f32[eta + i * lanes + l] += sum;
        }
      }
    });
    const linear = word(description, LINEAR);
    const values = (word(description, LINEAR_VALUES) >> 2) + block * linear * BLOCK;
    const slopes = word(description, LINEAR_SLOPES) >> 2;
    for (let j = 0; j < linear; j++) {
      for (let i = 0; i < rows; i++) {
        const x = f32[values + j * BLOCK + i];
        for (let l = 0; l < lanes; l++) f32[eta + i * lanes + l] += fround(x * f32[slopes + j * lanes + l]);
      }
    }
  }

  const margin32 = (eta: number, signed: number): number => {
    const m = signed < 0 || Object.is(signed, -0) ? eta : -eta;
    const low = m < 80 ? m : 80;
    return -80 < low ? low : -80;
  };

  function chunk(description: number, number: number, scratch: number, double: boolean): void {
    const lanes = word(description, VECTORS) * (double ? 2 : 4);
    const f = double ? f64 : f32;
    const shift = double ? 3 : 2;
    const packs = word(description, PACKS);
    const packTable = word(description, PACK_TABLE) >> 2;
    const list = word(description, GRADIENT_LIST);
    const count = word(description, GRADIENT_COUNT);
    const linear = word(description, LINEAR);
    const results = (word(description, RESULTS) + number * word(description, RESULT_BYTES)) >> 3;
    const linearSums = results + word(description, BINS) * lanes;
    const sums = linearSums + linear * lanes;
    const losses = sums + lanes;
    f64.fill(0, results, results + (word(description, RESULT_BYTES) >> 3));
    const eta = scratch >> shift;
    const byCode = eta + BLOCK * lanes;
    grouped(list, count, 1, (pack) => {
      const from = byCode + i32[packTable + pack * 4] * lanes;
      f.fill(0, from, from + i32[packTable + pack * 4 + 1] * lanes);
    });
    const chunkAt = (word(description, CHUNK_TABLE) >> 2) + number * 2;
    for (let block = i32[chunkAt]; block < i32[chunkAt] + i32[chunkAt + 1]; block++) {
      const blockAt = (word(description, BLOCK_TABLE) >> 2) + block * 2;
      const rows = i32[blockAt];
      const fold = i32[blockAt + 1];
      if (double) residuals64(description, lanes, block, rows, eta, sums, losses);
      else residuals32(description, lanes, block, rows, fold, eta, sums, losses);
      const codes = word(description, CODES) + block * packs * BLOCK;
      grouped(list, count, 1, (pack) => {
        const to = byCode + i32[packTable + pack * 4] * lanes;
        for (let i = 0; i < rows; i++) {
          const a = to + u8[codes + pack * BLOCK + i] * lanes;
          for (let l = 0; l < lanes; l++) f[a + l] += f[eta + i * lanes + l];
        }
      });
      const values = (word(description, LINEAR_VALUES) >> shift) + block * linear * BLOCK;
      for (let j = 0; j < linear; j++) {
        for (let l = 0; l < lanes; l++) {
          let g = 0;
          for (let i = 0; i < rows; i++) {
            const product = f[values + j * BLOCK + i] * f[eta + i * lanes + l];
            g = double ? g + product : fround(g + fround(product));
          }
          f64[linearSums + j * lanes + l] += g;
        }
      }
    }
    const columnTable = word(description, COLUMN_TABLE) >> 2;
    grouped(list, count, 1, (pack) => {
      const at = packTable + pack * 4;
      const from = byCode + i32[at] * lanes;
      for (let j = i32[at + 2]; j < i32[at + 2] + i32[at + 3]; j++) {
        const to = results + i32[columnTable + j * 2] * lanes;
        for (let code = 0; code < i32[at + 1]; code++) {
          const bin = to + u8[i32[columnTable + j * 2 + 1] + code] * lanes;
          for (let l = 0; l < lanes; l++) f64[bin + l] += f[from + code * lanes + l];
        }
      }
    });
  }

  function residuals32(
    description: number,
    lanes: number,
    block: number,
    rows: number,
    fold: number,
    eta: number,
    sums: number,
    losses: number,
  ): void {
    const signed = (word(description, SIGNED_WEIGHTS) >> 2) + block * BLOCK;
    const counts = word(description, COUNTS);
    const times = (i: number, l: number): number => (counts ? u8[counts + (block * BLOCK + i) * lanes + l] : 1);
    if (word(description, MODE) === 1) {
      for (let i = 0; i < rows; i++)
        for (let l = 0; l < lanes; l++) f32[eta + i * lanes + l] = Math.abs(f32[signed + i]) * times(i, l);
      return;
    }
    predict32(description, lanes, block, rows, eta);
    const vector = i32[(word(description, LOSS_VECTORS) >> 2) + fold];
    for (let l = 4 * vector; vector >= 0 && l < 4 * vector + 4; l++) {
      for (let i = 0; i < rows; i++) {
        const w = f32[signed + i];
        const m = margin32(f32[eta + i * lanes + l], w);
        f64[losses + l] += fround(Math.abs(w) * loss32(m, exp32(m)));
      }
    }
    for (let l = 0; l < lanes; l++) {
      let g = 0;
      for (let i = 0; i < rows; i++) {
        const w = f32[signed + i];
        const r = fround(w / fround(1 + exp32(margin32(f32[eta + i * lanes + l], w))));
        f32[eta + i * lanes + l] = r * times(i, l);
        g = fround(g + f32[eta + i * lanes + l]);
      }
      f64[sums + l] += g;
    }
  }

  function residuals64(
    description: number,
    lanes: number,
    block: number,
    rows: number,
    eta: number,
    sums: number,
    losses: number,
  ): void {
    const packs = word(description, PACKS);
    const offsets = word(description, OFFSETS);
    const intercepts = word(description, INTERCEPTS) >> 3;
    const codes = word(description, CODES) + block * packs * BLOCK;
    const tables = word(description, TABLES) >> 3;
    const packTable = word(description, PACK_TABLE) >> 2;
    for (let i = 0; i < rows; i++) {
      const o = offsets ? f64[(offsets >> 3) + block * BLOCK + i] : 0;
      for (let l = 0; l < lanes; l++) f64[eta + i * lanes + l] = f64[intercepts + l] + o;
    }
    grouped(word(description, ETA_LIST), word(description, ETA_COUNT), 2, (pack, together) => {
      const at = (p: number, i: number): number =>
        tables + (i32[packTable + (pack + p) * 4] + u8[codes + (pack + p) * BLOCK + i]) * lanes;
      for (let i = 0; i < rows; i++) {
        for (let l = 0; l < lanes; l++)
          f64[eta + i * lanes + l] += together === 1 ? f64[at(0, i) + l] : f64[at(0, i) + l] + f64[at(1, i) + l];
      }
    });
    const linear = word(description, LINEAR);
    const values = (word(description, LINEAR_VALUES) >> 3) + block * linear * BLOCK;
    const slopes = word(description, LINEAR_SLOPES) >> 3;
    for (let j = 0; j < linear; j++) {
      for (let i = 0; i < rows; i++) {
        for (let l = 0; l < lanes; l++) f64[eta + i * lanes + l] += f64[values + j * BLOCK + i] * f64[slopes + j * lanes + l];
      }
    }
    const signed = (word(description, SIGNED_WEIGHTS) >> 3) + block * BLOCK;
    for (let l = 0; l < lanes; l++) {
      let g = 0;
      let loss = 0;
      for (let i = 0; i < rows; i++) {
        const w = f64[signed + i];
        const at = eta + i * lanes + l;
        const m = w < 0 || Object.is(w, -0) ? f64[at] : -f64[at];
        const magnitude = Math.abs(m);
        const size = magnitude < 690 ? magnitude : 690;
        const u = exp64(-size);
        const inverse = 1 / (1 + u);
        const r = w * (m >= 0 ? u * inverse : inverse);
        g += r;
        loss += Math.abs(w) * (log64(u) + (m >= 0 ? 0 : size));
        f64[at] = r;
      }
      f64[sums + l] += g;
      f64[losses + l] += loss;
    }
  }

  function spread(description: number, double: boolean): void {
    const lanes = word(description, VECTORS) * (double ? 2 : 4);
    const f = double ? f64 : f32;
    const packTable = word(description, PACK_TABLE) >> 2;
    const columnTable = word(description, COLUMN_TABLE) >> 2;
    const contributions = word(description, CONTRIBUTIONS) >> 3;
    grouped(word(description, ETA_LIST), word(description, ETA_COUNT), 1, (pack) => {
      const at = packTable + pack * 4;
      let to = (word(description, TABLES) >> (double ? 3 : 2)) + i32[at] * lanes;
      for (let code = 0; code < i32[at + 1]; code++) {
        for (let l = 0; l < lanes; l++) {
          let sum = 0;
          for (let j = i32[at + 2]; j < i32[at + 2] + i32[at + 3]; j++) {
            const bin = i32[columnTable + j * 2] + u8[i32[columnTable + j * 2 + 1] + code];
            sum += f64[contributions + bin * lanes + l];
          }
          f[to++] = sum;
        }
      }
    });
  }

  function gram(description: number, unit: number, scratch: number): void {
    const size = word(description, GRAM_SIZE);
    const packs = word(description, PACKS);
    const linear = word(description, LINEAR);
    const packTable = word(description, PACK_TABLE) >> 2;
    const valueTable = word(description, GRAM_VALUES) >> 2;
    const to = (word(description, GRAM_RESULTS) >> 3) + unit * size * size;
    f64.fill(0, to, to + size * size);
    const eta = scratch >> 2;
    const slices = eta + BLOCK * 4;
    f32.fill(0, slices, slices + size * BLOCK);
    const unitAt = (word(description, GRAM_UNITS) >> 2) + unit * 3;
    for (let k = 0; k < i32[unitAt + 1]; k++) {
      const block = i32[unitAt] + k * i32[unitAt + 2];
      const rows = i32[(word(description, BLOCK_TABLE) >> 2) + block * 2];
      predict32(description, 4, block, rows, eta);
      const signed = (word(description, SIGNED_WEIGHTS) >> 2) + block * BLOCK;
      const padded = (rows + 3) & ~3;
      for (let i = 0; i < padded; i++) {
        const w = f32[signed + i];
        const e = exp32(margin32(f32[eta + i * 4], w));
        const q = fround(1 / fround(1 + e));
        const curvature = fround(fround(e * q) * q);
        const floored = curvature < fround(1e-10) ? fround(1e-10) : curvature;
        f32[slices + i] = i < rows ? Math.sqrt(fround(Math.abs(w) * floored)) : 0;
      }
      const codes = word(description, CODES) + block * packs * BLOCK;
      let slice = slices + BLOCK;
      for (let p = 0; p < packs; p++) {
        for (let j = i32[packTable + p * 4 + 2]; j < i32[packTable + p * 4 + 2] + i32[packTable + p * 4 + 3]; j++) {
          const values = i32[valueTable + j] >> 2;
          for (let i = 0; i < padded; i++) f32[slice + i] = f32[values + u8[codes + p * BLOCK + i]] * f32[slices + i];
          slice += BLOCK;
        }
      }
      const values = (word(description, LINEAR_VALUES) >> 2) + block * linear * BLOCK;
      for (let j = 0; j < linear; j++) {
        for (let i = 0; i < padded; i++) f32[slice + i] = f32[values + j * BLOCK + i] * f32[slices + i];
        slice += BLOCK;
      }
      products(slices, size, word(description, COLUMNS) + 1, padded, to);
    }
  }

  function products(slices: number, size: number, used: number, padded: number, to: number): void {
    const four = new Float32Array(4);
    for (let a = 0; a < used + (used & 1); a++) {
      for (let b = a & ~3; b < ((used + 3) & ~3); b++) {
        four.fill(0);
        for (let i = 0; i < padded; i++) four[i & 3] += fround(f32[slices + a * BLOCK + i] * f32[slices + b * BLOCK + i]);
        f64[to + a * size + b] += four[0] + four[1] + (four[2] + four[3]);
      }
    }
  }

  return {
    pass32: (description, number, scratch) => chunk(description, number, scratch, false),
    pass64: (description, number, scratch) => chunk(description, number, scratch, true),
    spread32: (description) => spread(description, false),
    spread64: (description) => spread(description, true),
    gram,
  };
}
