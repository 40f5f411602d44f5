import { AnalysisError } from '../analysis/analysisError.ts';

/**
 * A net weight shared out by counts (bins, rows) or expected tonnes, in whole kilograms that add up to it exactly:
 * what rounding leaves over goes to the largest remainders (Hamilton's method).
 * Example: 1000 kg by 1, 1 and 1 bins → 334, 333, 333.
 */
export function splitTicket(netKg: number, weights: readonly number[]): number[] {
  const total = weights.reduce((sum, weight) => sum + weight, 0);
  if (!(total > 0) || weights.some((weight) => !(weight >= 0))) throw new AnalysisError('bad_split', 'A split needs counts of 0 or more, at least one above 0.');
  const exact = weights.map((weight) => (netKg * weight) / total);
  const whole = exact.map(Math.floor);
  let left = Math.round(netKg - whole.reduce((sum, kg) => sum + kg, 0));
  const order = exact.map((kg, index) => ({ index, rest: kg - Math.floor(kg) })).sort((a, b) => b.rest - a.rest || a.index - b.index);
  for (const { index } of order) {
    if (left <= 0) break;
    if (weights[index] === 0) continue;
    whole[index]! += 1;
    left -= 1;
  }
  // A net weight with decimals keeps them, on the first part that has any.
  const rest = netKg - whole.reduce((sum, kg) => sum + kg, 0);
  const first = weights.findIndex((weight) => weight > 0);
  return whole.map((kg, index) => (index === first ? Number((kg + rest).toFixed(3)) : kg));
}
