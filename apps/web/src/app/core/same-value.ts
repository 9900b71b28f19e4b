/**
 * True where two values that came as JSON say the same. Keys may stand in another order, as a database gives them back, and a key without a value
 * is none.
 *
 * @example sameValue({ a: 1, b: [2] }, { b: [2], a: 1, c: undefined }) // true
 */
export function sameValue(one: unknown, other: unknown): boolean {
  if (Object.is(one, other)) return true;
  if (typeof one !== 'object' || typeof other !== 'object' || one === null || other === null) return false;
  if (Array.isArray(one) !== Array.isArray(other)) return false;
  const [left, right] = [one as Record<string, unknown>, other as Record<string, unknown>];
  const keys = new Set([...Object.keys(left), ...Object.keys(right)]);
  return [...keys].every((key) => sameValue(left[key], right[key]));
}
