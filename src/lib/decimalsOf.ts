/** Decimals that a person types beyond the usual ones of a figure. */
const MORE = 2;
const MOST = 6;

/**
 * How many decimals a figure is written with so that what was typed is what is read: 0.25 keeps both where one is usual, and
 * what is not 0 is never written as 0. What has still more decimals was reckoned, and is rounded as usual.
 */
export function decimalsOf(value: number, usual: number): number {
  if (!Number.isFinite(value) || value === 0) return usual;
  for (let decimals = usual; decimals <= usual + MORE; decimals++) {
    if (Math.abs(Number(value.toFixed(decimals)) - value) <= 1e-9 * Math.abs(value)) return decimals;
  }
  return Number(value.toFixed(usual)) === 0 ? Math.min(MOST, Math.ceil(-Math.log10(Math.abs(value)))) : usual;
}
