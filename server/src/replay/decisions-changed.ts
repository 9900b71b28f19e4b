/**
 * Share of applicants whom another score decides on otherwise, where both approve the same share of them, the highest scores first. Applicants who tie at
 * the limit are approved in the proportion that fills it, drawn alike for both scores: their order in the file has no say, and what is returned is an
 * expectation.
 *
 * @param first n finite scores, higher = good
 * @param second n finite scores of the same applicants
 * @param approvalRate share that is approved, 0 to 1
 * @returns 0 to 1; 0 without applicants
 * @example decisionsChanged(Float64Array.of(1, 2, 3, 4), Float64Array.of(1, 3, 2, 4), 0.5) // 0.5
 */
export function decisionsChanged(first: Float64Array, second: Float64Array, approvalRate: number): number {
  if (first.length === 0) return 0;
  const [a, b] = [approvals(first, approvalRate), approvals(second, approvalRate)];
  let changed = 0;
  for (let row = 0; row < first.length; row++) changed += Math.abs(a(first[row]) - b(second[row]));
  return changed / first.length;
}

/** The share of applicants with a score who are approved: 1 above the limit, 0 below, the share that is left at it. */
function approvals(scores: Float64Array, approvalRate: number): (score: number) => number {
  const wanted = approvalRate * scores.length;
  if (wanted <= 0) return () => 0;
  const sorted = Float64Array.from(scores).sort();
  const limit = sorted[Math.max(0, sorted.length - Math.ceil(wanted))];
  let [above, at] = [0, 0];
  for (const score of scores) {
    if (score > limit) above++;
    else if (score === limit) at++;
  }
  const share = (wanted - above) / at;
  return (score) => (score > limit ? 1 : score === limit ? share : 0);
}
