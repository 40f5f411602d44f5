/**
 * Whole numbers nearest to a list of shares with the same total (largest remainder; ties go to the earlier share).
 * The shares must add up to a whole number. Example: 4.76 0.60 14.29 0.36 → 5 1 14 0.
 */
export function largestRemainder(shares: readonly number[]): number[] {
  const total = Math.round(shares.reduce((sum, share) => sum + share, 0));
  // A share such as 2.9999999999999996 is a whole number that lost its last bit.
  const whole = shares.map((share) => Math.floor(share + 1e-9));
  const order = shares.map((share, i) => ({ i, rest: share - whole[i]! })).sort((a, b) => b.rest - a.rest || a.i - b.i);
  let missing = total - whole.reduce((sum, n) => sum + n, 0);
  for (const { i } of order) {
    if (missing <= 0) break;
    whole[i]! += 1;
    missing -= 1;
  }
  return whole;
}
