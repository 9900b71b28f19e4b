/**
 * An invented mixed file of applications to Saltmarsh Mutual, the same on every machine: an identifier, a date, an outcome, and columns such as
 * a lender has: flags, counts, categories, amounts with pence, amounts in hundreds, ratios, scores with a code for "no record", months that
 * are often missing, dates. Shares and shapes are chosen to look like a sample of applicants, not to suit a reader.
 */
export type ColumnType = 'text' | 'integer' | 'numeric' | 'date';

export interface MixedColumn {
  readonly name: string;
  /** How PostgreSQL keeps it. */
  readonly type: ColumnType;
  readonly field: (random: () => number, row: number) => string;
}

const pick = (words: readonly string[], skew: number) => (random: () => number) =>
  words[Math.floor(words.length * random() ** skew)];
const normal = (random: () => number): number => {
  // Irwin-Hall: twelve uniform numbers have variance one.
  let sum = -6;
  for (let k = 0; k < 12; k++) sum += random();
  return sum;
};
const geometric = (random: () => number, stay: number): number => Math.floor(Math.log(1 - random()) / Math.log(stay));
const two = (value: number): string => (value < 10 ? `0${value}` : String(value));
const day = (random: () => number, years: number): string =>
  `${2025 - Math.floor(random() * years)}-${two(1 + Math.floor(random() * 12))}-${two(1 + Math.floor(random() * 28))}`;

interface Kind {
  readonly word: string;
  readonly type: ColumnType;
  readonly field: (random: () => number) => string;
  /** Two digits of pence follow where there is an amount. */
  readonly pence?: boolean;
}

const kinds: readonly Kind[] = [
  { word: 'flag', type: 'integer', field: (random) => (random() < 0.08 ? '1' : '0') },
  { word: 'arrears', type: 'integer', field: (random) => String(Math.min(12, geometric(random, 0.3))) },
  { word: 'searches', type: 'integer', field: (random) => String(geometric(random, 0.75)) },
  { word: 'income', type: 'numeric', field: (random) => Math.exp(10 + 0.6 * normal(random)).toFixed(0), pence: true },
  { word: 'utilisation', type: 'numeric', field: (random) => (random() < 0.2 ? '0.0000' : (random() ** 1.5).toFixed(4)) },
  {
    word: 'months_on_book',
    type: 'integer',
    field: (random) => (random() < 0.15 ? '' : String(Math.floor(360 * random() ** 2))),
  },
  { word: 'housing', type: 'text', field: pick(['owner', 'mortgage', 'tenant', 'parents', 'other', ''], 1.6) },
  { word: 'age', type: 'integer', field: (random) => String(Math.round(18 + 62 * random() ** 1.3)) },
  { word: 'limit', type: 'integer', field: (random) => String(100 * Math.round(Math.exp(3.5 + 0.7 * normal(random)))) },
  {
    word: 'score',
    type: 'integer',
    field: (random) => (random() < 0.07 ? '-999' : String(Math.round(640 + 70 * normal(random)))),
  },
  { word: 'accounts', type: 'integer', field: (random) => String(geometric(random, 0.8)) },
  {
    word: 'balance',
    type: 'numeric',
    field: (random) => (random() < 0.35 ? '' : Math.exp(6.5 + 1.2 * normal(random)).toFixed(0)),
    pence: true,
  },
  { word: 'channel', type: 'text', field: pick(['branch', 'web', 'phone', 'broker'], 1.2) },
  { word: 'missed', type: 'integer', field: (random) => (random() < 0.9 ? '0' : String(1 + geometric(random, 0.4))) },
  {
    word: 'savings',
    type: 'numeric',
    field: (random) => (random() < 0.2 ? '0' : Math.exp(8 + 1.5 * normal(random)).toFixed(0)),
    pence: true,
  },
  { word: 'other_debt', type: 'numeric', field: (random) => Math.exp(8.5 + 0.9 * normal(random)).toFixed(0), pence: true },
  { word: 'ratio', type: 'numeric', field: (random) => (0.35 + 0.12 * normal(random)).toFixed(5) },
  { word: 'opened_on', type: 'date', field: (random) => (random() < 0.3 ? '' : day(random, 9)) },
  {
    word: 'employment',
    type: 'text',
    field: pick(['employed full-time', 'self-employed', 'employed part-time', 'retired', 'student', ''], 1.8),
  },
  {
    word: 'turnover',
    type: 'numeric',
    field: (random) => (random() < 0.1 ? '' : Math.exp(8 + normal(random)).toFixed(0)),
    pence: true,
  },
  {
    word: 'grade',
    type: 'text',
    field: (random) => `${'ABCDEFG'[Math.floor(7 * random() ** 1.4)]}${1 + Math.floor(random() * 5)}`,
  },
  { word: 'term', type: 'integer', field: (random) => String(12 * (1 + Math.floor(7 * random()))) },
];

/** Fields are drawn from so many of their kind: a hundred million would take longer to make than to read. Pence are drawn beside them. */
const poolSize = 65_536;

const drawn = ({ field, pence = false }: Kind, random: () => number): MixedColumn['field'] => {
  const pool = Array.from({ length: poolSize }, () => field(random));
  const draw = (chance: () => number): string => pool[Math.floor(poolSize * chance())];
  if (!pence) return draw;
  const behind = Array.from({ length: 100 }, (_, k) => `.${two(k)}`);
  return (chance) => {
    const whole = draw(chance);
    return whole === '' ? '' : whole + behind[Math.floor(100 * chance())];
  };
};

/** Park and Miller 1988: its period of two thousand million is long enough here, and it is quick. */
function chances(seed: number): () => number {
  let state = seed;
  return () => (state = (state * 48_271) % 2_147_483_647) / 2_147_483_647;
}

/** Columns of a file so wide. */
export function mixedColumns(count: number): MixedColumn[] {
  const random = chances(20_261_201);
  const fields = kinds.map((kind) => drawn(kind, random));
  const dates = drawn({ word: 'applied_on', type: 'date', field: (chance) => day(chance, 3) }, random);
  const columns: MixedColumn[] = [
    { name: 'application_id', type: 'text', field: (_, row) => `SM-${1_000_000 + row}` },
    { name: 'applied_on', type: 'date', field: dates },
  ];
  for (let k = 0; columns.length < count - 1; k++) {
    const { word, type } = kinds[k % kinds.length];
    columns.push({ name: `${word}_${Math.floor(k / kinds.length) + 1}`, type, field: fields[k % kinds.length] });
  }
  return [...columns, { name: 'bad', type: 'integer', field: (chance) => (chance() < 0.06 ? '1' : '0') }];
}

/** The file in pieces of about 8 MiB. */
export function* mixedFile(rows: number, columns: readonly MixedColumn[]): Generator<Buffer> {
  const random = chances(12_345);
  let text = `${columns.map(({ name }) => name).join(',')}\n`;
  for (let row = 0; row < rows; row++) {
    const fields = columns.map(({ field }) => field(random, row));
    text += `${fields.join(',')}\n`;
    if (text.length >= 8 << 20) {
      yield Buffer.from(text, 'latin1');
      text = '';
    }
  }
  yield Buffer.from(text, 'latin1');
}
