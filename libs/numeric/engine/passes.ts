import * as word from './kernels/descriptor';
import type { Coordinates, Lane } from './lane';
import { LANES_DOUBLE, LANES_SINGLE, rowsOfFoldIn, type Layout, type Sample } from './layout';
import type { Standardisation } from './standardisation';
import { Alone, type Crew } from './crew';

export type Precision = 'single' | 'double';

/** Runs passes: from the points of lanes to their exact gradients. */
export class Passes {
  /** Passes made so far, and passes times lanes. */
  count = 0;
  private readonly i32: Int32Array;
  private readonly f32: Float32Array;
  private readonly f64: Float64Array;
  private readonly u8: Uint8Array;
  /** Total weight of all rows. */
  private readonly weight: number;
  private readonly sums: Float64Array;
  private readonly heldSums: Float64Array;
  private readonly gradient: Float64Array;
  /** First bin of each coded column, and the number of bins after the last. */
  private readonly firstBins: Int32Array;
  private readonly packOf: Int32Array;

  constructor(
    readonly layout: Layout,
    private readonly crew: Crew = new Alone(),
  ) {
    const { buffer } = layout.machine;
    this.i32 = new Int32Array(buffer);
    this.f32 = new Float32Array(buffer);
    this.f64 = new Float64Array(buffer);
    this.u8 = new Uint8Array(buffer);
    this.weight = layout.foldWeights.reduce((sum, w) => sum + w, 0);
    const rows = layout.bins + layout.linear + 2;
    this.sums = new Float64Array(rows * LANES_SINGLE);
    this.heldSums = new Float64Array(rows);
    this.gradient = new Float64Array(layout.columns.length + 1);
    const codedColumns = layout.columns.slice(0, layout.coded);
    this.firstBins = Int32Array.from([...codedColumns.map(({ firstBin }) => firstBin), layout.bins]);
    this.packOf = Int32Array.from(codedColumns, ({ pack }) => pack);
    crew.join(layout.machine, layout.at);
    this.describe(layout.at.description32, 4);
    this.describe(layout.at.description64, 8);
    this.describe(layout.at.descriptionGram, 4);
    const { i32 } = this;
    const { at, packs } = layout;
    const gram = at.descriptionGram >> 2;
    i32[gram + word.VECTORS] = 1;
    i32[gram + word.TABLES] = at.gramTables;
    i32[gram + word.ETA_LIST] = at.gramList;
    i32[gram + word.ETA_COUNT] = packs.length;
    packs.forEach((_, p) => (i32[(at.gramList >> 2) + p] = p));
  }

  close(): void {
    this.crew.leave();
  }

  private describe(description: number, bytes: number): void {
    const { at, packs, bins, linear, columns, gramSize } = this.layout;
    const at32 = bytes === 4;
    const words: [number, number][] = [
      [word.CODES, at.codes],
      [word.PACKS, packs.length],
      [word.PACK_TABLE, at.packTable],
      [word.COLUMN_TABLE, at.columnTable],
      [word.BLOCK_TABLE, at.blockTable],
      [word.CHUNK_TABLE, at.chunkTable],
      [word.TABLES, at.tables],
      [word.CONTRIBUTIONS, at.contributions],
      [word.ETA_LIST, at.etaList],
      [word.GRADIENT_LIST, at.gradientList],
      [word.SIGNED_WEIGHTS, at32 ? at.signed32 : at.signed64],
      [word.OFFSETS, at32 ? at.offset32 : at.offset64],
      [word.INTERCEPTS, at.intercepts],
      [word.LOSS_VECTORS, at.lossVectors],
      [word.LINEAR, linear],
      [word.LINEAR_VALUES, at32 ? at.linear32 : at.linear64],
      [word.LINEAR_SLOPES, at.slopes],
      [word.RESULTS, at.results],
      [word.BINS, bins],
      [word.GRAM_SIZE, gramSize],
      [word.GRAM_VALUES, at.gramValueTable],
      [word.GRAM_RESULTS, at.gramResults],
      [word.COLUMNS, columns.length],
    ];
    for (const [place, value] of words) this.i32[(description >> 2) + place] = value;
  }

  /** Counts of rows by lane for resamples: byte of slot and lane. */
  get counts(): Uint8Array {
    const { at, blocks } = this.layout;
    return new Uint8Array(this.layout.machine.buffer, at.counts, blocks * word.BLOCK * LANES_SINGLE);
  }

  /** Sets counts of lanes that leave a fold out each: 0 for its rows, 1 for the others. */
  leaveOut(folds: readonly number[]): void {
    const { counts } = this;
    const { slots } = this.layout;
    const width = Math.ceil(folds.length / 4) * 4;
    counts.fill(1);
    folds.forEach((fold, l) => {
      const { start, end } = rowsOfFoldIn(this.layout, fold);
      for (let s = start; s < end; s++) counts[slots[s] * width + l] = 0;
    });
  }

  /**
   * One pass: gradient (and in doubles the loss) of every lane at its point; in singles the loss over the fold that a lane leaves out.
   * @param lanes at most 16 in singles, 8 in doubles
   * @param counted rows count as often as `counts` says for the lane (singles); the counts' stride is the number of lanes rounded up to 4
   */
  run(lanes: readonly Lane[], precision: Precision, counted = false): void {
    this.count++;
    const { layout, i32, f64 } = this;
    const { at, bins, columns, coded, linear, packs, folds } = layout;
    const double = precision === 'double';
    const perVector = double ? 2 : 4;
    const vectors = Math.ceil(lanes.length / perVector);
    const width = vectors * perVector;
    const description = double ? at.description64 : at.description32;
    const d = description >> 2;
    i32[d + word.VECTORS] = vectors;
    i32[d + word.COUNTS] = counted ? at.counts : 0;
    i32[d + word.MODE] = 0;
    i32[d + word.RESULT_BYTES] = (bins + linear + 2) * width * 8;

    const f = double ? f64 : this.f32;
    const shift = double ? 3 : 2;
    f64.fill(0, at.contributions >> 3, (at.contributions >> 3) + bins * width);
    f.fill(0, at.intercepts >> shift, (at.intercepts >> shift) + width);
    f.fill(0, at.slopes >> shift, (at.slopes >> shift) + linear * width);
    i32.fill(-1, at.lossVectors >> 2, (at.lossVectors >> 2) + folds);
    const active = new Uint8Array(packs.length);
    for (let l = 0; l < lanes.length; l++) {
      const { point, standardisation, leftOut } = lanes[l];
      f[(at.intercepts >> shift) + l] = point.intercept;
      if (leftOut >= 0 && !counted) i32[(at.lossVectors >> 2) + leftOut] = (l / perVector) | 0;
      this.contribute(point.t, standardisation.values, l, width, active);
      for (let j = coded; j < columns.length; j++) f[(at.slopes >> shift) + (j - coded) * width + l] = point.t[j];
    }
    // Packs take part by fours, so that the kernels always group a lane's sums alike: whom it rides beside never shows in its last bits.
    let used = 0;
    for (let four = 0; four < packs.length; four += 4) {
      const end = Math.min(packs.length, four + 4);
      if (!active.subarray(four, end).includes(1)) continue;
      for (let p = four; p < end; p++) i32[(at.etaList >> 2) + used++] = p;
    }
    i32[d + word.ETA_COUNT] = used;
    for (let p = 0; p < packs.length; p++) i32[(at.gradientList >> 2) + p] = p;
    i32[d + word.GRADIENT_COUNT] = packs.length;
    if (double) layout.machine.kernels.spread64(description);
    else layout.machine.kernels.spread32(description);
    this.crew.run(double ? 'pass64' : 'pass32', description, layout.chunks);
    this.collect(lanes, width, double, counted);
  }

  /** What the bins of a lane's coded columns add to its linear predictor; packs with a coordinate are marked. */
  private contribute(t: Float64Array, values: Float64Array, l: number, width: number, active: Uint8Array): void {
    const { f64, firstBins, packOf } = this;
    const { at, coded } = this.layout;
    const first = (at.contributions >> 3) + l;
    for (let j = 0; j < coded; j++) {
      const own = t[j];
      if (own === 0) continue;
      active[packOf[j]] = 1;
      const end = firstBins[j + 1];
      for (let b = firstBins[j], to = first + b * width; b < end; b++, to += width) f64[to] = own * values[b];
    }
  }

  /** Sums chunks in their order and turns sums by bin into gradients; the chunks of a lane's left-out fold are taken out of its sums again. */
  private collect(lanes: readonly Lane[], width: number, double: boolean, counted: boolean): void {
    const { layout, f64 } = this;
    const { at, bins, linear, chunks } = layout;
    const size = (bins + linear + 2) * width;
    const first = at.results >> 3;
    const sums = this.sums.subarray(0, size);
    sums.fill(0);
    for (let c = 0; c < chunks; c++) {
      const from = first + c * size;
      for (let k = 0; k < size; k++) sums[k] += f64[from + k];
    }
    const last = bins + linear + 1;
    lanes.forEach((lane, l) => {
      const { point, standardisation, leftOut } = lane;
      if (leftOut < 0 || counted) {
        this.gradientOf(sums, width, l, null, standardisation, standardisation.totalWeight, this.gradient);
        point.loss = double ? sums[last * width + l] / standardisation.totalWeight : NaN;
      } else {
        const held = this.heldSums;
        const { start, end } = layout.chunksOfFold[leftOut];
        for (let k = 0; k <= last; k++) held[k] = f64[first + start * size + k * width + l];
        for (let c = start + 1; c < end; c++) {
          for (let k = 0; k <= last; k++) held[k] += f64[first + c * size + k * width + l];
        }
        lane.heldOut = held[last];
        if (lane.heldOutGradient)
          this.gradientOf(held, 1, 0, null, standardisation, layout.foldWeights[leftOut], lane.heldOutGradient);
        this.gradientOf(sums, width, l, held, standardisation, standardisation.totalWeight, this.gradient);
        point.loss = double ? (sums[last * width + l] - held[last]) / standardisation.totalWeight : NaN;
      }
      point.gradientOfIntercept = this.gradient[0];
      for (let j = 0; j < point.gradient.length; j++) point.gradient[j] = this.gradient[j + 1];
    });
  }

  /**
   * From sums by bin to the gradient of the mean loss, the intercept's part first.
   * @param sums of the lane `l` of `width`
   * @param less what is taken off them, or null
   */
  private gradientOf(
    sums: Float64Array,
    width: number,
    l: number,
    less: Float64Array | null,
    s: Standardisation,
    weight: number,
    gradient: Float64Array,
  ): void {
    const { firstBins } = this;
    const { bins, columns, linear, coded } = this.layout;
    const { values, used } = s;
    const at = (k: number): number => sums[k * width + l] - (less ? less[k] : 0);
    gradient[0] = at(bins + linear) / weight;
    for (let j = 0; j < coded; j++) {
      let sum = 0;
      if (used[j] !== 0) {
        const end = firstBins[j + 1];
        if (less) for (let b = firstBins[j]; b < end; b++) sum += values[b] * (sums[b * width + l] - less[b]);
        else for (let b = firstBins[j]; b < end; b++) sum += values[b] * sums[b * width + l];
      }
      gradient[j + 1] = sum / weight;
    }
    for (let j = coded; j < columns.length; j++) gradient[j + 1] = used[j] !== 0 ? at(bins + j - coded) / weight : 0;
  }

  /** Sum of w z^2 of a linear column over the rows as a lane counts them. */
  linearSquares(column: number, lane: number, width: number): number {
    const { at, blocks, linear } = this.layout;
    const { counts } = this;
    let sum = 0;
    for (let block = 0; block < blocks; block++) {
      const rows = this.i32[(at.blockTable >> 2) + block * 2];
      const values = (at.linear64 >> 3) + (block * linear + column) * word.BLOCK;
      const signed = (at.signed64 >> 3) + block * word.BLOCK;
      for (let i = 0; i < rows; i++)
        sum += Math.abs(this.f64[signed + i]) * counts[(block * word.BLOCK + i) * width + lane] * this.f64[values + i] ** 2;
    }
    return sum;
  }

  /** Sums of weights by bin for lanes whose rows count as `counts` says: [bin x lanes], and the lanes' totals. */
  weigh(lanes: number): { width: number; bins: Float64Array; linear: Float64Array } {
    const { layout, i32, f64 } = this;
    const { at, bins, linear, chunks, packs, folds } = layout;
    const width = Math.ceil(lanes / 4) * 4;
    const d = at.description32 >> 2;
    i32[d + word.VECTORS] = width / 4;
    i32[d + word.COUNTS] = at.counts;
    i32[d + word.MODE] = 1;
    i32[d + word.RESULT_BYTES] = (bins + linear + 2) * width * 8;
    i32.fill(-1, at.lossVectors >> 2, (at.lossVectors >> 2) + folds);
    for (let p = 0; p < packs.length; p++) i32[(at.gradientList >> 2) + p] = p;
    i32[d + word.GRADIENT_COUNT] = packs.length;
    this.crew.run('pass32', at.description32, chunks);
    const size = (bins + linear + 2) * width;
    const sums = new Float64Array(size);
    for (let c = 0; c < chunks; c++) {
      const from = (at.results >> 3) + c * size;
      for (let k = 0; k < size; k++) sums[k] += f64[from + k];
    }
    return { width, bins: sums.subarray(0, bins * width), linear: sums.subarray(bins * width, (bins + linear) * width) };
  }

  /**
   * Weighted Gram matrices of (1, columns) per fold at a point, of a sample of the rows scaled up, by total weight of all rows.
   * @param apart false = one matrix of all folds
   * @returns folds x (columns + 1)^2, symmetric
   */
  gram(point: Coordinates, standardisation: Standardisation, sample: Sample = 'large', apart = true): Float64Array[] {
    const { layout } = this;
    const { first, units } = layout.gramUnits[sample];
    this.prepareGram(point, standardisation, first);
    this.crew.run('gram', layout.at.descriptionGram, units.length);
    const size = layout.columns.length + 1;
    const grams = Array.from({ length: apart ? layout.folds : 1 }, () => new Float64Array(size * size));
    units.forEach(({ fold }, u) => this.addUnit(grams[apart ? fold : 0], sample, u));
    grams.forEach((gram) => mirror(gram, size));
    return grams;
  }

  /**
   * One weighted Gram matrix of all rows but those of a fold, by total weight of all rows. For layouts whose curvatures are of all rows.
   * @param room gets (columns + 1)^2 values
   */
  gramWithout(fold: number, point: Coordinates, standardisation: Standardisation, room: Float64Array): void {
    const { layout, i32 } = this;
    const { first, units } = layout.gramUnits.large;
    this.prepareGram(point, standardisation, first);
    const blocksOf = (u: number): number => (layout.at.gramUnits >> 2) + (first + u) * 3 + 1;
    const blocks = units.map((_, u) => i32[blocksOf(u)]);
    units.forEach((unit, u) => unit.fold === fold && (i32[blocksOf(u)] = 0));
    this.crew.run('gram', layout.at.descriptionGram, units.length);
    units.forEach((_, u) => (i32[blocksOf(u)] = blocks[u]));
    room.fill(0);
    units.forEach((unit, u) => unit.fold !== fold && this.addUnit(room, 'large', u));
    mirror(room, layout.columns.length + 1);
  }

  /** Tells the kernel the linear predictor, the values by code and the units. */
  private prepareGram(point: Coordinates, standardisation: Standardisation, firstUnit: number): void {
    const { layout, i32, f32, f64, u8 } = this;
    const { at, bins, columns, coded, linear, packs } = layout;
    const d = at.descriptionGram >> 2;
    i32[d + word.OFFSETS] = at.offset32;
    f64.fill(0, at.contributions >> 3, (at.contributions >> 3) + bins * 4);
    f32.fill(0, at.intercepts >> 2, (at.intercepts >> 2) + 4);
    f32.fill(0, at.slopes >> 2, (at.slopes >> 2) + linear * 4);
    f32[at.intercepts >> 2] = point.intercept;
    let place = at.gramValues;
    for (let j = 0; j < columns.length; j++) {
      const { firstBin, bins: own, pack } = columns[j];
      if (firstBin < 0) {
        f32[(at.slopes >> 2) + (j - coded) * 4] = point.t[j];
        continue;
      }
      for (let b = 0; b < own; b++)
        f64[(at.contributions >> 3) + (firstBin + b) * 4] = point.t[j] * standardisation.values[firstBin + b];
      i32[(at.gramValueTable >> 2) + j] = place;
      const decode = i32[(at.columnTable >> 2) + j * 2 + 1];
      for (let code = 0; code < packs[pack].codes; code++)
        f32[(place >> 2) + code] = standardisation.values[firstBin + u8[decode + code]];
      place += packs[pack].codes * 4;
    }
    layout.machine.kernels.spread32(at.descriptionGram);
    i32[d + word.GRAM_UNITS] = at.gramUnits + firstUnit * 12;
  }

  /** Adds the upper half of what a unit of the Gram matrix came to. */
  private addUnit(to: Float64Array, sample: Sample, u: number): void {
    const { layout, f64, weight } = this;
    const { gramSize } = layout;
    const size = layout.columns.length + 1;
    const part = layout.gramUnits[sample].units[u].share / weight;
    const from = (layout.at.gramResults >> 3) + u * gramSize * gramSize;
    for (let a = 0; a < size; a++) {
      const source = from + a * gramSize;
      const row = a * size;
      for (let b = a; b < size; b++) to[row + b] += f64[source + b] * part;
    }
  }
}

/** Fills the lower half of a symmetric matrix. */
function mirror(gram: Float64Array, size: number): void {
  for (let a = 1; a < size; a++) for (let b = 0; b < a; b++) gram[a * size + b] = gram[b * size + a];
}

export const lanesOf = (precision: Precision): number => (precision === 'double' ? LANES_DOUBLE : LANES_SINGLE);
