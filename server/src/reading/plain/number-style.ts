/**
 * Numbers whose spelling follows from their value: an optional minus, no leading zeros, and a number of decimals that is known. They are kept
 * as whole numbers ("12.50" with two decimals as 1250) and come back to the letter. Anything else ("007", "+5", "1e3", "-0") stays text.
 */

export interface NumberStyle {
  /** Decimals that are always written; zeros beyond them are not ("12.5", "13" have 0, "12.0" has 1, "12.50" has 2). */
  readonly least: number;
  /** Decimals that are written at most, and by which the whole number is scaled. */
  readonly most: number;
  /** The decimal sign as a byte: 46 or 44. */
  readonly sign: number;
}

/** Whole numbers stay below this: nine digits, which a 32-bit integer holds with room for codes beside them. */
export const mostWhole = 1_000_000_000;
export const mostDecimals = 9;
const powers = Float64Array.from({ length: mostDecimals + 1 }, (_, k) => 10 ** k);

/** A plain number as it is spelled, or null: `whole` with `decimals` of its digits behind the sign. */
export interface Spelled {
  readonly whole: number;
  readonly decimals: number;
}

/** @example spelled('12.50', 46) // { whole: 1250, decimals: 2 } */
export function spelled(text: string, sign: number): Spelled | null {
  const minus = text.charCodeAt(0) === 45 ? 1 : 0;
  if (text.length === minus || text.length - minus > 10) return null;
  let whole = 0;
  let point = -1;
  for (let at = minus; at < text.length; at++) {
    const code = text.charCodeAt(at);
    if (code >= 48 && code <= 57) whole = whole * 10 + code - 48;
    else if (code === sign && point < 0 && at > minus) point = at;
    else return null;
  }
  const end = point < 0 ? text.length : point;
  if (point === text.length - 1 || (end - minus > 1 && text.charCodeAt(minus) === 48)) return null;
  if (whole >= mostWhole || (minus === 1 && whole === 0)) return null;
  return { whole: minus ? -whole : whole, decimals: point < 0 ? 0 : text.length - point - 1 };
}

/** The whole number of a spelled one under a style, or NaN where the style would spell it otherwise. */
export function wholeOf({ whole, decimals }: Spelled, style: NumberStyle): number {
  if (decimals < style.least || decimals > style.most) return NaN;
  if (decimals > style.least && whole % 10 === 0) return NaN;
  const scaled = whole * powers[style.most - decimals];
  return Math.abs(scaled) < mostWhole ? scaled : NaN;
}

/** @example spell(1250, { least: 0, most: 2, sign: 46 }) // '12.5' */
export function spell(whole: number, { least, most, sign }: NumberStyle): string {
  if (most === 0) return String(whole);
  const digits = String(Math.abs(whole)).padStart(most + 1, '0');
  let decimals = most;
  while (decimals > least && digits.charCodeAt(digits.length - 1 - (most - decimals)) === 48) decimals--;
  const before = digits.slice(0, digits.length - most);
  const behind = digits.slice(digits.length - most, digits.length - most + decimals);
  return `${whole < 0 ? '-' : ''}${before}${decimals > 0 ? String.fromCharCode(sign) + behind : ''}`;
}

/** The number that a whole one stands for: the nearest double, as reading its text gives. */
export const valueOf = (whole: number, style: NumberStyle): number => whole / powers[style.most];

/** How often numbers of a column have each number of decimals, and how often the last of them is a zero. */
export class StyleVotes {
  readonly count = new Uint32Array(mostDecimals + 1);
  readonly zero = new Uint32Array(mostDecimals + 1);
  /** Fields that are neither empty nor plain numbers. */
  others = 0;

  /** The style that keeps most of them, or null where most are no plain numbers. `known`: the style of earlier rows, kept if as good. */
  best(sign: number, known: NumberStyle | null): NumberStyle | null {
    const total = this.count.reduce((sum, one) => sum + one, 0);
    if (total === 0 || total < this.others) return null;
    const largest = this.count.findLastIndex((one) => one > 0);
    const candidates: NumberStyle[] = known ? [known] : [];
    for (let k = 0; k <= largest; k++) if (this.count[k] > 0) candidates.push({ least: k, most: k, sign });
    for (const least of [0, 1]) if (least < largest) candidates.push({ least, most: largest, sign });
    let best = candidates[0];
    for (const one of candidates) if (this.kept(one) > this.kept(best)) best = one;
    return this.kept(best) * 2 >= total + this.others ? best : null;
  }

  private kept({ least, most }: NumberStyle): number {
    let kept = 0;
    for (let k = least; k <= most; k++) kept += k === least ? this.count[k] : this.count[k] - this.zero[k];
    return kept;
  }
}
