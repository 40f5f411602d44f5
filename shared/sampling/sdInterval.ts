import { chiSquareQuantile } from './quantiles.ts';

/**
 * How unsure a standard deviation is: s·√(ν/χ²). A standard result for normal readings, and one that
 * leans on their being normal more than the interval of a mean does (Cochran 1977 ch. 2, from memory).
 */
export function sdInterval(sd: number, df: number, confidence: number): { readonly lower: number; readonly upper: number } {
  const tail = (1 - confidence) / 2;
  return { lower: sd * Math.sqrt(df / chiSquareQuantile(1 - tail, df)), upper: sd * Math.sqrt(df / chiSquareQuantile(tail, df)) };
}

/** One-sided factor that a true spread exceeds with chance 1 − level. Example: df 4, 80 % → 1.557575. */
export function sdUpperFactor(df: number, level = 0.8): number {
  return Math.sqrt(df / chiSquareQuantile(1 - level, df));
}
