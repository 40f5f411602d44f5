import { incompleteBeta, incompleteGamma, lnGamma, type TwoTails } from './specialFunctions.ts';

/**
 * Distribution functions: both tails of each, so that a small p-value keeps its digits.
 * In: a value and degrees of freedom (need not be whole). Out: probabilities below and above the value.
 * Checked against R 4.2.2 (pnorm, pt, pchisq, pf, pt with ncp).
 */

/** Standard normal. Example: normalTails(1.96).upper = 0.0249979. */
export function normalTails(value: number): TwoTails {
  const { upper } = incompleteGamma(0.5, (value * value) / 2);
  const far = upper / 2;
  return value > 0 ? { lower: 1 - far, upper: far } : { lower: far, upper: 1 - far };
}

/** Student's t with `df` > 0; df = Infinity is the normal. Example: studentTTails(2.262157, 9).upper = 0.025. */
export function studentTTails(value: number, df: number): TwoTails {
  if (df === Infinity) return normalTails(value);
  const square = value * value;
  const far = incompleteBeta(df / 2, 0.5, { x: df / (df + square), y: square / (df + square) }).lower / 2;
  return value > 0 ? { lower: 1 - far, upper: far } : { lower: far, upper: 1 - far };
}

/** Chi-square with `df` degrees of freedom. */
export function chiSquareTails(value: number, df: number): TwoTails {
  return incompleteGamma(df / 2, value / 2);
}

/** F with `dfAbove` and `dfBelow` degrees of freedom. Example: fTails(1.180462, 4, 20).upper = 0.349447. */
export function fTails(value: number, dfAbove: number, dfBelow: number): TwoTails {
  if (value <= 0) return { lower: 0, upper: 1 };
  const above = dfAbove * value;
  return incompleteBeta(dfAbove / 2, dfBelow / 2, { x: above / (above + dfBelow), y: dfBelow / (above + dfBelow) });
}

/**
 * Lower tail of the noncentral t, for the power of a t test: a Poisson-weighted sum of incomplete betas
 * (Lenth 1989, Applied Statistics 38:185, algorithm AS 243), over all weights within twelve standard deviations.
 */
export function noncentralTLower(value: number, df: number, noncentrality: number): number {
  if (noncentrality === 0) return studentTTails(value, df).lower;
  if (value < 0) return 1 - noncentralTLower(-value, df, -noncentrality);
  const square = value * value;
  const at = { x: square / (square + df), y: df / (square + df) };
  const half = (noncentrality * noncentrality) / 2;
  const last = Math.ceil(half + 12 * Math.sqrt(half + 1) + 20);
  let sum = normalTails(-noncentrality).lower;
  for (let j = 0; j <= last; j++) {
    const poisson = Math.exp(j * Math.log(half) - half - lnGamma(j + 1));
    const between = Math.sign(noncentrality) * Math.exp((j + 0.5) * Math.log(half) - half - lnGamma(j + 1.5));
    sum += 0.5 * (poisson * incompleteBeta(j + 0.5, df / 2, at).lower + between * incompleteBeta(j + 1, df / 2, at).lower);
  }
  return Math.min(1, Math.max(0, sum));
}
