import type { CodedProblem } from './coded-columns';
import { writeConstants } from './kernels/constants';
import { BLOCK, CONSTANTS_AT, WORDS } from './kernels/descriptor';
import { type KernelKind, type Machine, makeMachine } from './kernels/kernels';
import { packColumns, type Pack } from './packing';

/** Most lanes of one pass. */
export const LANES_SINGLE = 16;
export const LANES_DOUBLE = 8;

/** Rows of a chunk, the unit of work of a thread: few for few rows, so that two threads find work, and never so many that sums in singles get coarse. */
const MOST_CHUNK_ROWS = 32768;
const LEAST_CHUNK_ROWS = 2048;
const CHUNKS_OF_FEW_ROWS = 8;

/**
 * Rows that curvatures are taken from. A large sample gives one that is right to about a per cent; what changes along a path is told by the difference
 * of two small ones, whose sampling errors cancel.
 */
const LARGE_SAMPLE = 262_144;
const SMALL_SAMPLE = 8192;
const SMALL_SAMPLE_PER_COLUMN = 256;

/** One internal column: coded ones in the order of the packs, then linear ones. */
export interface InternalColumn {
  /** Number in the problem. */
  readonly source: number;
  /** First bin among all bins, and number of bins; -1 and 0 for linear columns. */
  readonly firstBin: number;
  readonly bins: number;
  /** Pack, or -1. */
  readonly pack: number;
}

export type Sample = 'large' | 'small';

export interface GramUnits {
  /** The first unit among all, and the fold of each with what its sums are multiplied by. */
  readonly first: number;
  readonly units: readonly { readonly fold: number; readonly share: number }[];
}

export interface Places {
  readonly codes: number;
  readonly signed32: number;
  readonly signed64: number;
  readonly offset32: number;
  readonly offset64: number;
  readonly linear32: number;
  readonly linear64: number;
  readonly packTable: number;
  readonly columnTable: number;
  readonly blockTable: number;
  readonly chunkTable: number;
  readonly tables: number;
  readonly contributions: number;
  readonly etaList: number;
  readonly gradientList: number;
  readonly intercepts: number;
  readonly lossVectors: number;
  readonly slopes: number;
  readonly results: number;
  readonly counts: number;
  readonly gramUnits: number;
  readonly gramTables: number;
  readonly gramValueTable: number;
  readonly gramValues: number;
  readonly gramList: number;
  readonly gramResults: number;
  readonly description32: number;
  readonly description64: number;
  readonly descriptionGram: number;
  readonly control: number;
  readonly scratch: number;
  readonly scratchBytes: number;
}

/** Rows and columns as the kernels read them, in one memory. */
export interface Layout {
  readonly machine: Machine;
  readonly rows: number;
  /** Rows of the problem in the order of the layout, block by block: `slots[s]` is where the row at `order[s]` lies (block x 256 + place). */
  readonly order: Uint32Array;
  readonly slots: Uint32Array;
  readonly columns: readonly InternalColumn[];
  readonly coded: number;
  readonly linear: number;
  readonly packs: readonly Pack[];
  readonly codesOfPacks: number;
  readonly bins: number;
  readonly folds: number;
  readonly rowsOfFold: readonly number[];
  readonly blocks: number;
  readonly chunks: number;
  /** A chunk lies in one fold, unless folds are left out by row: then there are none of a fold's own. */
  readonly chunksOfFold: readonly { readonly start: number; readonly end: number }[];
  /** Folds are left out row by row, by counts of 0 and 1: chunks of so few rows would cost more to begin and end than their rows do. */
  readonly byRow: boolean;
  /** Units of the large sample, and of the small one; the same where there are few rows. */
  readonly gramUnits: Readonly<Record<Sample, GramUnits>>;
  /** Curvatures are of all rows, because there are few. */
  readonly isWhole: boolean;
  readonly gramSize: number;
  readonly workers: number;
  readonly at: Places;
  /** Sums of weights by fold and bin. */
  readonly binWeights: Float64Array;
  readonly foldWeights: Float64Array;
  /** Centre and scale of linear columns, whose values are stored centred and scaled. */
  readonly linearCentre: Float64Array;
  readonly linearScale: Float64Array;
  /** Sums over rows by fold and linear column: w z, w z^2. */
  readonly linearMoments: Float64Array;
}

/** Where the rows of a fold (from 0) lie in `order`. */
export function rowsOfFoldIn({ rowsOfFold }: Pick<Layout, 'rowsOfFold'>, fold: number): { start: number; end: number } {
  let start = 0;
  for (let before = 0; before < fold; before++) start += rowsOfFold[before];
  return { start, end: start + rowsOfFold[fold] };
}

export interface LayoutOptions {
  /** Fold of each row from 0; absent = one fold. */
  readonly folds?: ArrayLike<number>;
  readonly kernels?: KernelKind;
  /** Threads that may work on it, with the caller. */
  readonly workers?: number;
  /** Folds are left out by row; absent = where there are few rows. */
  readonly byRow?: boolean;
  /** Room for counts by row and lane: what resamples need. */
  readonly counted?: boolean;
  /** A layout of the same problem but for some columns (their numbers): packs without one of them are taken over as they are. */
  readonly earlier?: { readonly layout: Layout; readonly changed: readonly number[] };
}

/** Below lie the constants of the kernels. */
const FIRST_ADDRESS = 1024;

/** Addresses one after the other, each on a boundary of 64 bytes. */
class Addresses {
  private next = FIRST_ADDRESS;
  take(bytes: number): number {
    const at = this.next;
    this.next = (at + bytes + 63) & ~63;
    return at;
  }
  get size(): number {
    return this.next;
  }
}

/** Below, codes are packed less densely and folds are left out by row: what a pass does for each code, and for each chunk, weighs more than what it does for each row. */
const FEW_ROWS = 5000;

/** Lays a problem out: rows with weight, sorted by fold, in blocks that lie in one fold. */
export function layOut(problem: CodedProblem, options: LayoutOptions = {}): Layout {
  const { columns, outcome, weights, offset } = problem;
  const folds = options.folds;
  let foldCount = 1;
  for (let i = 0; folds && i < folds.length; i++) foldCount = Math.max(foldCount, folds[i] + 1);
  const { earlier } = options;
  const { order, perFold } = earlier
    ? { order: earlier.layout.order, perFold: earlier.layout.rowsOfFold }
    : sorted(outcome.length, weights, folds, foldCount);
  const rows = order.length;
  const blocks: { rows: number; fold: number }[] = [];
  perFold.forEach((count, fold) => {
    const pieces = Math.ceil(count / BLOCK);
    for (let k = 0; k < pieces; k++)
      blocks.push({ rows: Math.floor(((k + 1) * count) / pieces) - Math.floor((k * count) / pieces), fold });
  });
  const slots = new Uint32Array(rows);
  let row = 0;
  blocks.forEach((block, b) => {
    for (let i = 0; i < block.rows; i++) slots[row++] = b * BLOCK + i;
  });

  const codedPlaces = columns.flatMap((column, j) => (column.kind === 'coded' ? [j] : []));
  const linearPlaces = columns.flatMap((column, j) => (column.kind === 'linear' ? [j] : []));
  const most = rows >= FEW_ROWS ? 256 : 64;
  const binsOf = codedPlaces.map((j) => columns[j].values.length);
  const { packs, kept } = earlier ? repacked(earlier, codedPlaces, binsOf, most) : { packs: packColumns(binsOf, most), kept: [] };
  const internal: InternalColumn[] = [];
  let bins = 0;
  packs.forEach((pack, p) => {
    for (const member of pack.members) {
      const source = codedPlaces[member];
      internal.push({ source, firstBin: bins, bins: columns[source].values.length, pack: p });
      bins += columns[source].values.length;
    }
  });
  for (const source of linearPlaces) internal.push({ source, firstBin: -1, bins: 0, pack: -1 });
  const linear = linearPlaces.length;
  const codesOfPacks = packs.reduce((sum, { codes }) => sum + codes, 0);

  const chunkRows = Math.min(MOST_CHUNK_ROWS, Math.max(LEAST_CHUNK_ROWS, Math.ceil(rows / CHUNKS_OF_FEW_ROWS)));
  const byRow = foldCount > 1 && (options.byRow ?? rows < FEW_ROWS);
  const blocksOfChunk = Math.max(1, Math.floor(chunkRows / BLOCK));
  const { chunks, chunksOfFold } = byRow
    ? chunksOf(
        blocks.map(() => ({ fold: 0 })),
        1,
        blocks.length,
      )
    : chunksOf(blocks, foldCount, blocksOfChunk);
  const large = gramUnitsOf(blocks, Math.floor(rows / LARGE_SAMPLE));
  const smallStep = Math.floor(rows / Math.max(SMALL_SAMPLE, SMALL_SAMPLE_PER_COLUMN * columns.length));
  const small = smallStep > 1 ? gramUnitsOf(blocks, smallStep) : [];
  const units = [...large, ...small];
  const gramSize = (internal.length + 1 + 3) & ~3;
  const workers = options.workers ?? 1;

  const addresses = new Addresses();
  const stride = 64;
  const padded = blocks.length * BLOCK;
  const scratchBytes = (Math.max(BLOCK * stride + codesOfPacks * stride, BLOCK * 16 + gramSize * BLOCK * 4) + 127) & ~63;
  const resultBytes = (bins + linear + 2) * 16 * 8;
  const at: Places = {
    control: addresses.take(64),
    description32: addresses.take(WORDS * 4),
    description64: addresses.take(WORDS * 4),
    descriptionGram: addresses.take(WORDS * 4),
    codes: addresses.take(padded * packs.length),
    signed32: addresses.take(padded * 4),
    signed64: addresses.take(padded * 8),
    offset32: offset ? addresses.take(padded * 4) : 0,
    offset64: offset ? addresses.take(padded * 8) : 0,
    linear32: addresses.take(padded * linear * 4),
    linear64: addresses.take(padded * linear * 8),
    packTable: addresses.take(packs.length * 16),
    columnTable: addresses.take(internal.length * 8 + packs.reduce((sum, { codes, members }) => sum + codes * members.length, 0)),
    blockTable: addresses.take(blocks.length * 8),
    chunkTable: addresses.take(chunks.length * 8),
    tables: addresses.take(codesOfPacks * stride),
    contributions: addresses.take(bins * 16 * 8),
    etaList: addresses.take(packs.length * 4),
    gradientList: addresses.take(packs.length * 4),
    intercepts: addresses.take(stride),
    lossVectors: addresses.take(foldCount * 4),
    slopes: addresses.take(linear * stride),
    results: addresses.take(chunks.length * resultBytes),
    counts: options.counted || byRow ? addresses.take(padded * LANES_SINGLE) : 0,
    gramUnits: addresses.take(units.length * 12),
    gramTables: addresses.take(codesOfPacks * 16),
    gramValueTable: addresses.take(internal.length * 4),
    gramValues: addresses.take(internal.reduce((sum, { pack }) => sum + (pack < 0 ? 0 : packs[pack].codes), 0) * 4),
    gramList: addresses.take(packs.length * 4),
    gramResults: addresses.take(units.length * gramSize * gramSize * 8),
    scratch: addresses.take(scratchBytes * workers),
    scratchBytes,
  };
  const machine = makeMachine(addresses.size, options.kernels, workers > 1);
  const { buffer } = machine;
  writeConstants(buffer, CONSTANTS_AT);
  const u8 = new Uint8Array(buffer);
  const i32 = new Int32Array(buffer);
  const f32 = new Float32Array(buffer);
  const f64 = new Float64Array(buffer);

  const foldWeights = new Float64Array(foldCount);
  for (let s = 0; s < rows; s++) {
    const i = order[s];
    const w = weights ? weights[i] : 1;
    const signed = outcome[i] === 1 ? -w : w;
    f32[(at.signed32 >> 2) + slots[s]] = signed;
    f64[(at.signed64 >> 3) + slots[s]] = signed;
    if (offset) f32[(at.offset32 >> 2) + slots[s]] = f64[(at.offset64 >> 3) + slots[s]] = offset[i];
    foldWeights[blocks[slots[s] >> 8].fold] += w;
  }
  blocks.forEach((block, b) => i32.set([block.rows, block.fold], (at.blockTable >> 2) + b * 2));
  chunks.forEach((chunk, c) => i32.set([chunk.first, chunk.blocks], (at.chunkTable >> 2) + c * 2));
  units.forEach((unit, u) => i32.set([unit.first, unit.blocks, unit.step], (at.gramUnits >> 2) + u * 3));

  const binWeights = layOutCodes(problem, {
    packs,
    codedPlaces,
    internal,
    bins,
    order,
    slots,
    blocks,
    foldCount,
    u8,
    i32,
    at,
    kept,
    earlier,
  });

  const moments = layOutLinear(problem, { linearPlaces, order, slots, blocks, foldCount, f32, f64, at });
  return {
    machine,
    rows,
    order,
    slots,
    columns: internal,
    coded: internal.length - linear,
    linear,
    packs,
    codesOfPacks,
    bins,
    folds: foldCount,
    rowsOfFold: perFold,
    blocks: blocks.length,
    chunks: chunks.length,
    chunksOfFold: byRow ? [] : chunksOfFold,
    byRow,
    gramUnits: {
      large: { first: 0, units: large },
      small: small.length > 0 ? { first: large.length, units: small } : { first: 0, units: large },
    },
    isWhole: small.length === 0,
    gramSize,
    workers,
    at,
    binWeights,
    foldWeights,
    ...moments,
  };
}

function sorted(
  length: number,
  weights: ArrayLike<number> | undefined,
  folds: ArrayLike<number> | undefined,
  foldCount: number,
): { order: Uint32Array; perFold: readonly number[] } {
  const perFold = new Array<number>(foldCount).fill(0);
  const takes = (i: number): boolean => !weights || weights[i] > 0;
  for (let i = 0; i < length; i++) if (takes(i)) perFold[folds ? folds[i] : 0]++;
  const next: number[] = [];
  perFold.reduce((start, count, fold) => ((next[fold] = start), start + count), 0);
  const order = new Uint32Array(perFold.reduce((sum, count) => sum + count, 0));
  for (let i = 0; i < length; i++) if (takes(i)) order[next[folds ? folds[i] : 0]++] = i;
  return { order, perFold };
}

/** Chunks of about equal size, each in one fold. */
function chunksOf(
  blocks: readonly { fold: number }[],
  folds: number,
  most: number,
): { chunks: { first: number; blocks: number }[]; chunksOfFold: { start: number; end: number }[] } {
  const chunks: { first: number; blocks: number }[] = [];
  const chunksOfFold: { start: number; end: number }[] = [];
  let first = 0;
  for (let fold = 0; fold < folds; fold++) {
    let end = first;
    while (end < blocks.length && blocks[end].fold === fold) end++;
    const start = chunks.length;
    const pieces = Math.ceil((end - first) / most);
    for (let k = 0; k < pieces; k++) {
      const from = first + Math.floor((k * (end - first)) / pieces);
      chunks.push({ first: from, blocks: first + Math.floor(((k + 1) * (end - first)) / pieces) - from });
    }
    chunksOfFold.push({ start, end: chunks.length });
    first = end;
  }
  return { chunks, chunksOfFold };
}

/** One unit per fold, at least four in all so that threads share them; every step-th block where there are rows enough. */
function gramUnitsOf(
  blocks: readonly { rows: number; fold: number }[],
  wantedStep: number,
): { fold: number; first: number; blocks: number; step: number; share: number }[] {
  const step = Math.max(1, wantedStep);
  const units: { fold: number; first: number; blocks: number; step: number; share: number }[] = [];
  const folds = (blocks.at(-1)?.fold ?? 0) + 1;
  const pieces = Math.max(1, Math.ceil(4 / folds));
  let start = 0;
  for (let fold = 0; fold < folds; fold++) {
    let end = start;
    while (end < blocks.length && blocks[end].fold === fold) end++;
    const all = end - start;
    const taken = Math.ceil(all / step);
    const sum = (first: number, count: number, by: number): number => {
      let total = 0;
      for (let k = 0; k < count; k++) total += blocks[first + k * by].rows;
      return total;
    };
    const share = sum(start, all, 1) / Math.max(1, sum(start, taken, step));
    for (let piece = 0; piece < pieces; piece++) {
      const from = Math.floor((piece * taken) / pieces);
      const to = Math.floor(((piece + 1) * taken) / pieces);
      if (to > from) units.push({ fold, first: start + from * step, blocks: to - from, step, share });
    }
    start = end;
  }
  return units;
}

/** The packs of an earlier layout, as far as none of their columns has changed; `kept` says which of the old ones the first packs are. */
function repacked(
  earlier: { readonly layout: Layout; readonly changed: readonly number[] },
  codedPlaces: readonly number[],
  bins: readonly number[],
  most: number,
): { packs: Pack[]; kept: number[] } {
  const touched = (pack: Pack): boolean => pack.members.some((member) => earlier.changed.includes(codedPlaces[member]));
  const kept: number[] = [];
  const packs: Pack[] = [];
  const loose: number[] = [];
  earlier.layout.packs.forEach((pack, p) => {
    if (touched(pack)) loose.push(...pack.members);
    else {
      kept.push(p);
      packs.push(pack);
    }
  });
  const again = packColumns(
    loose.map((member) => bins[member]),
    most,
  );
  return { packs: [...packs, ...again.map((pack) => ({ ...pack, members: pack.members.map((place) => loose[place]) }))], kept };
}

/** Writes codes of packs, and where each code's bins are; returns sums of weights by fold and bin. */
function layOutCodes(
  problem: CodedProblem,
  on: {
    packs: readonly Pack[];
    codedPlaces: readonly number[];
    internal: readonly InternalColumn[];
    bins: number;
    order: Uint32Array;
    slots: Uint32Array;
    blocks: readonly { rows: number; fold: number }[];
    foldCount: number;
    u8: Uint8Array;
    i32: Int32Array;
    at: Places;
    kept: readonly number[];
    earlier: LayoutOptions['earlier'];
  },
): Float64Array {
  const { packs, codedPlaces, internal, bins, order, blocks, foldCount, u8, i32, at, kept, earlier } = on;
  const { columns, weights } = problem;
  const binWeights = new Float64Array(foldCount * bins);
  const before = earlier ? new Uint8Array(earlier.layout.machine.buffer) : u8;
  let column = 0;
  let firstCode = 0;
  let decode = at.columnTable + internal.length * 8;
  packs.forEach((pack, p) => {
    i32.set([firstCode, pack.codes, column, pack.members.length], (at.packTable >> 2) + p * 4);
    const byCode = new Float64Array(foldCount * pack.codes);
    const sources = pack.members.map((member) => {
      const own = columns[codedPlaces[member]];
      return own.kind === 'coded' ? own.codes : new Uint8Array(0);
    });
    const { strides } = pack;
    let s = 0;
    for (let b = 0; b < blocks.length; b++) {
      const { rows, fold } = blocks[b];
      const to = at.codes + (b * packs.length + p) * BLOCK;
      const sums = fold * pack.codes;
      if (p < kept.length && earlier) {
        const from = earlier.layout.at.codes + (b * earlier.layout.packs.length + kept[p]) * BLOCK;
        for (let i = 0; i < rows; i++) u8[to + i] = before[from + i];
      } else packBlock(sources, strides, order, s, rows, u8, to);
      for (let i = 0; i < rows; i++) byCode[sums + u8[to + i]] += weights ? weights[order[s + i]] : 1;
      s += rows;
    }
    pack.members.forEach((_, k) => {
      const { firstBin, bins: own } = internal[column + k];
      i32.set([firstBin, decode], (at.columnTable >> 2) + (column + k) * 2);
      for (let code = 0; code < pack.codes; code++) {
        const bin = Math.floor(code / strides[k]) % own;
        u8[decode + code] = bin;
        for (let fold = 0; fold < foldCount; fold++) binWeights[fold * bins + firstBin + bin] += byCode[fold * pack.codes + code];
      }
      decode += pack.codes;
    });
    column += pack.members.length;
    firstCode += pack.codes;
  });
  return binWeights;
}

function packBlock(
  sources: readonly Uint8Array[],
  strides: readonly number[],
  order: Uint32Array,
  first: number,
  rows: number,
  u8: Uint8Array,
  to: number,
): void {
  const [a] = sources;
  for (let i = 0; i < rows; i++) u8[to + i] = a[order[first + i]];
  for (let k = 1; k < sources.length; k++) {
    const source = sources[k];
    const stride = strides[k];
    for (let i = 0; i < rows; i++) u8[to + i] += source[order[first + i]] * stride;
  }
}

function layOutLinear(
  problem: CodedProblem,
  on: {
    linearPlaces: readonly number[];
    order: Uint32Array;
    slots: Uint32Array;
    blocks: readonly { fold: number }[];
    foldCount: number;
    f32: Float32Array;
    f64: Float64Array;
    at: Places;
  },
): { linearCentre: Float64Array; linearScale: Float64Array; linearMoments: Float64Array } {
  const { linearPlaces, order, slots, blocks, foldCount, f32, f64, at } = on;
  const { weights } = problem;
  const count = linearPlaces.length;
  const linearCentre = new Float64Array(count);
  const linearScale = new Float64Array(count);
  const linearMoments = new Float64Array(foldCount * count * 2);
  linearPlaces.forEach((place, j) => {
    const { values } = problem.columns[place];
    let total = 0;
    let mean = 0;
    const first = values[order[0]];
    for (const i of order) {
      const w = weights ? weights[i] : 1;
      total += w;
      mean += w * (values[i] - first);
    }
    const centre = first + mean / total;
    // Squared as shares of the largest distance: on scales of 1e-300 or 1e300 the squares themselves would vanish or overflow.
    let furthest = 0;
    for (const i of order) furthest = Math.max(furthest, Math.abs(values[i] - centre));
    let variance = 0;
    if (furthest > 0) for (const i of order) variance += (weights ? weights[i] : 1) * ((values[i] - centre) / furthest) ** 2;
    const scale = furthest * Math.sqrt(variance / total);
    linearCentre[j] = centre;
    linearScale[j] = scale;
    for (let s = 0; s < order.length; s++) {
      const i = order[s];
      const slot = slots[s];
      const z = scale > 0 ? (values[i] - centre) / scale : 0;
      const to = (slot >> 8) * count * BLOCK + j * BLOCK + (slot & 255);
      f32[(at.linear32 >> 2) + to] = z;
      f64[(at.linear64 >> 3) + to] = z;
      const { fold } = blocks[slot >> 8];
      const w = weights ? weights[i] : 1;
      linearMoments[(fold * count + j) * 2] += w * z;
      linearMoments[(fold * count + j) * 2 + 1] += w * z * z;
    }
  });
  return { linearCentre, linearScale, linearMoments };
}
