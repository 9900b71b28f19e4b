/**
 * The gamma function's logarithm and its upper part, written out: what the pages run must not reach for the global object by way of a text that is compiled, as
 * the library for `tails.ts` does, because their policy bars it (Trusted Types). A spec holds
 * them to that library, and to SciPy where `a` is large.
 */

/** ln Gamma(x) for x above 0: Stirling's series (NIST Digital Library of Mathematical Functions, 5.11.1) from 12 on, below it by Gamma(x + 1) = x Gamma(x). */
export function logGamma(x: number): number {
  let shifted = x;
  let product = 1;
  while (shifted < 12) product *= shifted++;
  const inverse = 1 / shifted;
  const square = inverse * inverse;
  const series = inverse * (1 / 12 - square * (1 / 360 - square * (1 / 1260 - square * (1 / 1680 - square / 1188))));
  return (shifted - 0.5) * Math.log(shifted) - shifted + 0.5 * Math.log(2 * Math.PI) + series - Math.log(product);
}

/**
 * Q(a, y), the upper part of the gamma function as a share: by the series of the lower part up to y = a + 1, by the continued fraction beyond, so that small
 * tails keep their digits (NIST Digital Library of Mathematical Functions, 8.7.1 and 8.9.2; the fraction by Lentz's method).
 * @param a above 0; @param y at least 0
 */
export function upperGamma(a: number, y: number): number {
  if (y <= 0) return 1;
  const front = Math.exp(a * Math.log(y) - y - logGamma(a));
  if (y < a + 1) {
    let term = 1 / a;
    let sum = term;
    for (let n = a + 1; term > sum * 1e-17; n++) {
      term *= y / n;
      sum += term;
    }
    return Math.max(0, 1 - front * sum);
  }
  const tiny = 1e-300;
  let b = y + 1 - a;
  let c = 1 / tiny;
  let d = 1 / b;
  let fraction = d;
  for (let i = 1; i < 100_000; i++) {
    const an = -i * (i - a);
    b += 2;
    d = 1 / (an * d + b || tiny);
    c = b + an / c || tiny;
    const change = c * d;
    fraction *= change;
    if (Math.abs(change - 1) < 1e-16) break;
  }
  return front * fraction;
}
