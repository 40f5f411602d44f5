/**
 * A figure below the detection limit is kept as the limit with a flag, and typed as "<0.1". Means count it as half the
 * limit: common practice, and biased where many figures lie below (Helsel 2012, Statistics for Censored Environmental
 * Data, ch. 1), which is why screens say how many did.
 */
export function countedValue(value: number, flags: readonly string[]): number {
  return flags.includes('belowDetection') ? value / 2 : value;
}
