import { AnalysisError } from '../analysis/analysisError.ts';

/**
 * Sugar richness of must on its scales, at 20 °C. °Brix ↔ specific gravity (20/20 °C) by a fit to the AOAC table
 * (Hackbarth 2011), which is a true density ratio and so fits mass work. The cubic fit to the NBS table differs by
 * 0.02–0.04 °Brix because it is specific gravity as weighed in air; it is here for comparison with hydrometer tables.
 */

/** Coefficients of (°Brix/100)^1 … ^10. */
const AOAC = [0.3875135555, 0.09702881653, 0.388335748, -1.782845295, 5.591472292, -11.00667976, 13.62230734, -10.33082001, 4.387787019, -0.799555873];
const MOST_BRIX = 60;
/** Water at 20 °C, g/L. */
const WATER_G_PER_L = 998.203;

/** Example: 24 °Brix → 1.10092. */
export function brixToGravity(brix: number): number {
  checkBrix(brix);
  const b = brix / 100;
  return 1 + b * AOAC.reduceRight((sum, coefficient) => sum * b + coefficient, 0);
}

function checkBrix(brix: number): void {
  if (!(brix >= 0 && brix <= MOST_BRIX)) throw new AnalysisError('bad_brix', `°Brix must lie between 0 and ${MOST_BRIX}; got ${brix}.`);
}

/** Inverse of `brixToGravity` by bisection and secant steps on a rising function. Example: 1.09 → 21.5938. */
export function gravityToBrix(gravity: number): number {
  let low = 0;
  let high = MOST_BRIX;
  if (!(gravity >= brixToGravity(low) && gravity <= brixToGravity(high))) {
    throw new AnalysisError('bad_gravity', `Specific gravity must lie between 1 and ${brixToGravity(high).toFixed(3)}; got ${gravity}.`);
  }
  for (let step = 0; step < 60; step++) {
    const middle = (low + high) / 2;
    if (brixToGravity(middle) < gravity) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

/** Cubic fit to the NBS table (apparent specific gravity in air), 0 to 40 °Brix. Example: 1.09 → 21.5705; 1 → 0. */
export function airGravityToBrix(gravity: number): number {
  return Math.max(0, ((182.46007 * gravity - 775.68212) * gravity + 1262.7794) * gravity - 669.56218);
}

/** 145(1 − 1/S). Example: 1.1 → 13.182. */
export function gravityToBaume(gravity: number): number {
  return 145 * (1 - 1 / gravity);
}

export function baumeToGravity(baume: number): number {
  return 145 / (145 - baume);
}

/** 1000(S − 1). */
export function gravityToOechsle(gravity: number): number {
  return 1000 * (gravity - 1);
}

export function oechsleToGravity(oechsle: number): number {
  return 1 + oechsle / 1000;
}

/** Degrees of the Klosterneuburg must scale to °Oechsle: k (4.54 + 0.022 k), the usual approximation, from memory; the steps of Austrian wine law agree to a degree (17 → 84, 19 → 94, 21 → 105, 25 → 127, 30 → 156). */
export function klosterneuburgToOechsle(kmw: number): number {
  return kmw * (4.54 + 0.022 * kmw);
}

/** g of juice a litre. */
export function juiceDensityGPerL(brix: number): number {
  return WATER_G_PER_L * brixToGravity(brix);
}

/** All dissolved solids, g/L: more than the sugar, since °Brix counts acids and the rest too. Example: 24 °Brix → 263.75. */
export function solidsGPerL(brix: number): number {
  return (brix / 100) * juiceDensityGPerL(brix);
}
